import { medianOf } from "#app/lib/order-statistics.ts";

/** A group's centre and spread on the natural log scale. */
export type LogSpread = {
	/** Values above 0: the only ones that have a logarithm. */
	used: number;
	median: number;
	/** Median absolute deviation from the median. */
	medianDeviation: number;
	/** Mean absolute deviation from the median. */
	meanDeviation: number;
};

/** Turns a median and a mean absolute deviation into the standard deviation of a normal distribution. */
const perMedianDeviation = 1.4826;
const perMeanDeviation = 1.253314;

const fewestUsed = 4;

/**
 * Where the values of a group of like operations lie, on the log scale, where a double and a half are as far apart.
 * @param values in one unit; null and values not above 0 are left out.
 * @returns null with fewer than four usable values.
 * @throws {RangeError} for a value that is not finite.
 */
export function logSpreadOf(values: readonly (number | null)[]): LogSpread | null {
	const logs = values.filter((value) => value !== null && value > 0).map((value) => Math.log(value!));
	if (logs.length < fewestUsed) return null;
	const median = medianOf(logs);
	const deviations = logs.map((log) => Math.abs(log - median));
	const meanDeviation = deviations.reduce((sum, each) => sum + each, 0) / logs.length;
	return { used: logs.length, median, medianDeviation: medianOf(deviations), meanDeviation };
}

/**
 * How many robust standard deviations a value lies from the middle of like operations, on the log scale; below 0 for
 * less than usual. Beyond 3.5 either way it is worth asking about.
 * @param whenAlike what to do where half the group or more gave one and the same value, so that the median deviation is
 *   0: `mean_deviation` measures by the mean deviation, `no_score` gives up.
 * @returns null for a value that is missing or not above 0, and where there is no spread to measure by.
 * Source: Iglewicz and Hoaglin, How to Detect and Handle Outliers (1993), from memory; formula 19 of the reference set.
 */
export function robustScore(
	value: number | null,
	spread: LogSpread | null,
	whenAlike: "mean_deviation" | "no_score" = "mean_deviation",
): number | null {
	if (value === null || !(value > 0) || !spread) return null;
	const fallback = whenAlike === "mean_deviation" ? perMeanDeviation * spread.meanDeviation : 0;
	const unit = spread.medianDeviation > 0 ? perMedianDeviation * spread.medianDeviation : fallback;
	return unit > 0 ? (Math.log(value) - spread.median) / unit : null;
}

/** Whether a score is far enough from 0 to ask about the answer. */
export function isOdd(score: number | null, limit = 3.5): boolean {
	return score !== null && Math.abs(score) > limit;
}
