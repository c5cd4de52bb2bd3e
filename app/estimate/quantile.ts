import { domainDegreesOfFreedom, type DomainStratum } from "#app/estimate/domain.ts";
import { ratioEstimate, type Figure } from "#app/estimate/estimators.ts";
import { tQuantile } from "#app/estimate/distributions.ts";
import type { StrataFrame } from "#app/estimate/strata.ts";
import { tInterval, type Interval } from "#app/estimate/interval.ts";

/** One stratum's answers in the domain as counts by value: a day measure's histogram by day of year. */
export type HistogramStratum = WeightedCounts & Pick<DomainStratum, "samplingFraction" | "respondents">;
/** Counts by value of answers that share one weight. */
export type WeightedCounts = { weight: number; counts: readonly { value: number; n: number }[] };

/** An area's tally row of a measure of days, as far as quantiles need it. */
export type DayTally = { stratumKey: string; days: readonly { value: number; n: number }[] | null };

/**
 * The joined strata of a measure and crop seen from an area, as counts by day.
 * @returns every stratum that has respondents, also those with nobody in the area.
 * @throws {RangeError} when a row's stratum is not in the frame.
 */
export function histogramStrata(frame: StrataFrame, rows: readonly DayTally[]): HistogramStratum[] {
	const known = new Set(frame.strata.flatMap(({ stratumKeys }) => stratumKeys));
	const stray = rows.find(({ stratumKey }) => !known.has(stratumKey));
	if (stray) throw new RangeError(`stratum ${stray.stratumKey} has a tally but is not in the frame`);
	return frame.strata.flatMap(({ stratumKeys, frameSize, respondents }) => {
		if (respondents === 0) return [];
		const own = rows.filter(({ stratumKey }) => stratumKeys.includes(stratumKey));
		const counts = addedUp(own);
		return [{ weight: frameSize / respondents, samplingFraction: respondents / frameSize, respondents, counts }];
	});
}

/** The rows' counts as one histogram: a state's would be gone through a county at a time, and for every quantile anew. */
function addedUp(rows: readonly DayTally[]): readonly { value: number; n: number }[] {
	if (rows.length <= 1) return rows[0]?.days ?? [];
	const counts = new Map<number, number>();
	for (const { days } of rows) for (const { value, n } of days ?? []) counts.set(value, (counts.get(value) ?? 0) + n);
	return [...counts].map(([value, n]) => ({ value, n }));
}

/**
 * What to do when a share p of the weight ends exactly between two values: `lower` takes the value before (so that a
 * day stays a day), `midpoint` the mean of the two.
 */
export type QuantileRule = "lower" | "midpoint";

/** An interval of the share at or below the quantile, to be read back as values. */
export type ShareInterval = (share: Figure, df: number, respondents: number) => Interval | null;

export type QuantileFigure = {
	value: number;
	/** Ends of the 95 percent interval; null where the interval of the share leaves 0 to 1, or has no degree of freedom. */
	lower: number | null;
	upper: number | null;
	/** Half the interval's width over its t quantile; null where an end is missing. */
	standardError: number | null;
	/** Weighted share at or below the value, and its standard error. */
	share: Figure;
	respondents: number;
};

/** A value that somebody told, with the weight of all who told it or a lower one. */
export type Step = { value: number; cumulative: number };

/**
 * Weighted quantile of a domain in a stratified sample, with an interval by inverting the distribution function
 * (Woodruff): the share at or below the quantile, give or take t standard errors, is read back as values.
 * @param strata every stratum of the design that has respondents, also those with nobody in the domain (no counts).
 * @param p share below the quantile, above 0 and below 1: 0.5 is the median.
 * @param rule what to do where a share ends between two values. @param df degrees of freedom of t; those of the domain
 *   unless given. @param interval of the share; by t unless given. A logit interval never leaves 0 to 1. @param steps the
 *   domain's distribution, where it is known already.
 * @returns in units of the values; null where nobody of the domain answered. One respondent has no interval. Never NaN.
 * @throws {RangeError} for another p, or as `linearizedVariance` does.
 * Source: Woodruff (1952), from memory; formulas 7 and 17 of the reference set. Checked: R survey 4.1-1 `svyquantile`,
 * `qrule` "math" and "school".
 */
export function quantileEstimate(
	strata: readonly HistogramStratum[],
	p: number,
	options: QuantileOptions & { df?: number; steps?: readonly Step[] } = {},
): QuantileFigure | null {
	return quantileByShare(
		options.steps ?? distribution(strata),
		p,
		(value) => {
			const below = sharesAtOrBelow(strata, value);
			const respondents = below.reduce((sum, stratum) => sum + stratum.domain.n, 0);
			return { share: ratioEstimate(below)!, respondents, freedom: options.df ?? domainDegreesOfFreedom(below) };
		},
		options,
	);
}

export type QuantileOptions = { rule?: QuantileRule; interval?: ShareInterval };
/** The share of a domain at or below a value, and how many told one. */
export type ShareBelow = { share: Figure; respondents: number; freedom: number };

/**
 * The same by whichever weights: of parts of the domain that share one, or of each operation by itself.
 * @param shareAt estimates the share at or below a value.
 */
export function quantileByShare(
	steps: readonly Step[],
	p: number,
	shareAt: (value: number) => ShareBelow,
	{ rule = "lower", interval = tInterval }: QuantileOptions = {},
): QuantileFigure | null {
	if (!(p > 0 && p < 1)) throw new RangeError(`no quantile at ${p}`);
	if (steps.length === 0) return null;

	const value = valueAt(steps, p, rule);
	const { share, respondents, freedom } = shareAt(value);
	const figure = { value, share, respondents };
	const ends = respondents < 2 ? null : interval(share, freedom, respondents);
	if (!ends || freedom < 1) return { ...figure, lower: null, upper: null, standardError: null };

	const t = tQuantile(0.975, freedom);
	const lower = endAt(steps, ends.lower, rule);
	const upper = endAt(steps, ends.upper, rule);
	const standardError = lower === null || upper === null ? null : (upper - lower) / (2 * t);
	return { ...figure, lower, upper, standardError };
}

/** Quartiles and median alone, which a stratum of one respondent has too. @returns null where nobody of the domain answered. */
export function quartileValues(steps: readonly Step[]): { first: number; median: number; third: number } | null {
	if (steps.length === 0) return null;
	const [first, median, third] = [0.25, 0.5, 0.75].map((p) => valueAt(steps, p, "lower")) as [number, number, number];
	return { first, median, third };
}

/** Values in rising order, each with the weight at or below it. */
export function distribution(parts: readonly WeightedCounts[]): Step[] {
	const weights = new Map<number, number>();
	for (const { weight, counts } of parts) {
		for (const { value, n } of counts) if (n > 0) weights.set(value, (weights.get(value) ?? 0) + weight * n);
	}
	const steps = [...weights].map(([value, weight]) => ({ value, cumulative: weight }));
	steps.sort((a, b) => a.value - b.value);
	let cumulative = 0;
	for (const step of steps) step.cumulative = cumulative += step.cumulative;
	return steps;
}

function valueAt(steps: readonly Step[], p: number, rule: QuantileRule): number {
	const total = steps.at(-1)!.cumulative;
	const target = p * total;
	// With equal weights the target is often met exactly; without a tolerance rounding would decide.
	const found = steps.findIndex(({ cumulative }) => cumulative > target - 1e-12 * total);
	const step = steps[found] ?? steps.at(-1)!;
	const exact = Math.abs(step.cumulative - target) <= 1e-12 * total;
	const next = steps[found + 1];
	return exact && rule === "midpoint" && next ? (step.value + next.value) / 2 : step.value;
}

function endAt(steps: readonly Step[], share: number, rule: QuantileRule): number | null {
	const snapped = Math.abs(share) < 1e-12 ? 0 : Math.abs(share - 1) < 1e-12 ? 1 : share;
	return snapped < 0 || snapped > 1 ? null : valueAt(steps, snapped, rule);
}

/**
 * The strata with y = 1 for values at or below the bound, x = 1: their ratio is the share at or below. For a median it tells
 * what each stratum adds to its doubt.
 */
export function sharesAtOrBelow(strata: readonly HistogramStratum[], bound: number): DomainStratum[] {
	return strata.map(({ counts, ...stratum }) => {
		const n = countUpTo(counts, Infinity);
		const below = countUpTo(counts, bound);
		const mYY = n === 0 ? 0 : (below * (n - below)) / n;
		return { ...stratum, domain: { n, sumY: below, sumX: n, mYY, mXX: 0, mXY: 0 } };
	});
}

/** Answers at or below a bound. */
export function countUpTo(counts: WeightedCounts["counts"], bound: number): number {
	let sum = 0;
	for (const { value, n } of counts) if (value <= bound) sum += n;
	return sum;
}
