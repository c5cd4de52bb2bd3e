import { type CellParts, type Estimate, joinsAmong } from "#app/estimate/cell.ts";
import { proportionInterval } from "#app/estimate/interval.ts";
import {
	countUpTo,
	type DayTally,
	distribution,
	histogramStrata,
	quantileEstimate,
	type QuantileFigure,
	quartileValues,
	type Step,
} from "#app/estimate/quantile.ts";
import { daySteadiness, type SteadinessCutOffs } from "#app/estimate/steadiness.ts";
import type { StrataFrame } from "#app/estimate/strata.ts";

/** Days by which a quarter and three quarters of the operations were there. */
export type Quartiles = { first: number; third: number };

/** A figure of a day of the year has the median as its value, a standard error in days, and no coefficient of variation. */
export type DayEstimate = Estimate & { quartiles?: Quartiles };

/**
 * Median and quartiles of a day of the year in one area, from the area's histograms alone. All are days that somebody told.
 * The median's interval is that of the share of operations at or before it, as of any published proportion, read back as days.
 * @param frame the joined strata of the whole network for this measure and crop (`joinStrata`).
 * @param tallies the area's tally rows of this measure and crop.
 * @returns as `estimateCell`. No quartiles where fewer than two operations answered.
 * @throws {RangeError} when a tally's stratum is not in the frame.
 */
export function estimateDays(
	frame: StrataFrame,
	tallies: readonly DayTally[],
	cutOffs?: SteadinessCutOffs,
): DayEstimate {
	const rows = tallies.filter(({ days }) => days?.some(({ n }) => n > 0));
	const strata = histogramStrata(frame, rows);
	const present = strata.filter(({ counts }) => counts.length > 0);
	const respondents = present.reduce((sum, { counts }) => sum + countUpTo(counts, Infinity), 0);
	const steps = distribution(present);
	return dayOf(
		{
			respondents,
			joins: joinsAmong(frame, new Set(rows.map(({ stratumKey }) => stratumKey))),
			everybody: present.every(({ samplingFraction }) => samplingFraction === 1),
			steps,
			median: () => quantileEstimate(strata, 0.5, { interval: proportionInterval, steps }),
		},
		cutOffs,
	);
}

/** What a figure of days is made of, by whichever weights. `steps` are the area's days with their weights. */
export type DayParts = Pick<CellParts, "respondents" | "joins" | "everybody"> & {
	steps: readonly Step[];
	median: () => QuantileFigure | null;
};

/** A figure of days as it may be leant on: see `estimateDays`. */
export function dayOf({ steps, median, ...parts }: DayParts, cutOffs?: SteadinessCutOffs): DayEstimate {
	const { respondents, joins, everybody } = parts;
	const found = { respondents, joins, cv: null };
	const empty = { standardError: null, lower: null, upper: null, steadiness: "rough" } as const;
	const values = quartileValues(steps);
	if (values === null) return { ...found, ...empty, value: null, missing: "no_respondents" };
	const { median: value, ...quartiles } = values;
	if (respondents === 1) return { ...found, ...empty, value, missing: "one_respondent" };

	const { lower, upper, standardError } = everybody ? { lower: value, upper: value, standardError: 0 } : median()!;
	const halfWidth = lower === null || upper === null ? null : (upper - lower) / 2;
	return {
		...found,
		value,
		standardError,
		lower,
		upper,
		steadiness: daySteadiness({ halfWidth, respondents, everybody }, cutOffs),
		missing: null,
		quartiles,
	};
}
