import type { UncertainFigure } from "#app/estimate/change.ts";
import type { Figure } from "#app/estimate/estimators.ts";
import { normalInterval, type Interval } from "#app/estimate/interval.ts";

/** Plain mean of several seasons' figures. `seasons` counts those that had one. */
export type SeasonsMean = Figure & { seasons: number };

/** This season beside the mean of several. */
export type SeasonsComparison = {
	mean: SeasonsMean;
	/** This season less the mean, in units of the figures, with its 95 percent interval. */
	difference: Figure;
	interval: Interval;
	/** The difference over its standard error; null where that is 0. */
	standardErrorsApart: number | null;
	/** Difference over mean, a fraction; null where the mean is 0. Its standard error is null, too, where this season is in
	 * the mean: no formula is shipped for that. */
	relative: UncertainFigure | null;
};

/**
 * Mean of the figures of several seasons, one figure a season, each season counting alike. A missing season (null)
 * shortens the list. Seasons are taken as independent: operations that answer year after year make the true standard
 * error differ.
 * @returns in units of the figures; null where every season is missing.
 * @throws {RangeError} when a figure is not finite or its standard error below 0.
 * Source: formula 16 of the reference set.
 */
export function meanOfSeasons(figures: readonly (Figure | null)[]): SeasonsMean | null {
	const known = figures.filter((figure) => figure !== null);
	known.forEach(requireFigure);
	const seasons = known.length;
	if (seasons === 0) return null;
	const value = known.reduce((sum, figure) => sum + figure.value, 0) / seasons;
	return { value, standardError: Math.hypot(...known.map((figure) => figure.standardError)) / seasons, seasons };
}

/**
 * How far this season lies from the mean of several, five as a rule.
 * @param isOneOfThem this season's own figure is among `figures`: it then moves both ends of the comparison.
 * @returns null where every season is missing.
 * @throws {RangeError} as `meanOfSeasons`.
 * Source: formula 16 of the reference set.
 */
export function compareToSeasons(
	thisSeason: Figure,
	figures: readonly (Figure | null)[],
	{ isOneOfThem = false }: { isOneOfThem?: boolean } = {},
): SeasonsComparison | null {
	requireFigure(thisSeason);
	const mean = meanOfSeasons(figures);
	if (!mean) return null;
	// With k seasons of which this is one: (1 - 2/k) of its own variance and the mean's.
	const own = isOneOfThem ? 1 - 2 / mean.seasons : 1;
	const variance = own * thisSeason.standardError ** 2 + mean.standardError ** 2;
	// This season as the only one of its mean is no different from itself; rounding must not say otherwise.
	const standardError = Math.sqrt(Math.max(0, variance));
	const difference = { value: thisSeason.value - mean.value, standardError };
	return {
		mean,
		difference,
		interval: normalInterval(difference),
		standardErrorsApart: standardError === 0 ? null : difference.value / standardError,
		relative: mean.value === 0 ? null : relativeDifference(thisSeason, mean, isOneOfThem),
	};
}

function relativeDifference(thisSeason: Figure, mean: Figure, isOneOfThem: boolean): UncertainFigure {
	const value = (thisSeason.value - mean.value) / mean.value;
	if (isOneOfThem) return { value, standardError: null };
	const ofThis = thisSeason.standardError / mean.value;
	const ofMean = (thisSeason.value / mean.value ** 2) * mean.standardError;
	return { value, standardError: Math.hypot(ofThis, ofMean) };
}

function requireFigure({ value, standardError }: Figure): void {
	if (!Number.isFinite(value) || !(standardError >= 0 && Number.isFinite(standardError))) {
		throw new RangeError(`${value} with standard error ${standardError} is no figure`);
	}
}
