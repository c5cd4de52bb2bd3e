/**
 * The value below which a share p of a list lies, read between neighbours on a straight line: position 1 + (n - 1) p in
 * rising order (the rule numbered 7 by Hyndman and Fan, and the default of R and spreadsheets).
 * For lists that stand for themselves; weighted quantiles of a sample are in `app/estimate/quantile.ts`.
 * @param values in any order, one or more. @param p from 0 to 1.
 * @throws {RangeError} for an empty list, another p, or a value that is not finite.
 * Source: Hyndman and Fan, Sample quantiles in statistical packages (1996), from memory.
 */
export function quantileOf(values: readonly number[], p: number): number {
	if (values.length === 0 || !(p >= 0 && p <= 1))
		throw new RangeError(`no quantile at ${p} of ${values.length} values`);
	if (!values.every(Number.isFinite)) throw new RangeError("a quantile needs finite values");
	const sorted = values.toSorted((a, b) => a - b);
	const position = (sorted.length - 1) * p;
	const before = sorted[Math.floor(position)]!;
	const after = sorted[Math.ceil(position)]!;
	return before + (position % 1) * (after - before);
}

/** The middle value, or the mean of the two in the middle. @throws {RangeError} as `quantileOf`. */
export function medianOf(values: readonly number[]): number {
	return quantileOf(values, 0.5);
}
