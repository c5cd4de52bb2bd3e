/** A figure's likely range, as far as it has one. */
export type Ranged = { lower: number | null; upper: number | null };

/** The two ends, or null where a figure has no likely range. */
export const rangeOf = ({ lower, upper }: Ranged): [number, number] | null =>
	lower === null || upper === null ? null : [lower, upper];

/** Whether two likely ranges have no value in common. A figure without one is not known to differ from any other. */
export function isApart(a: Ranged, b: Ranged): boolean {
	const [one, other] = [rangeOf(a), rangeOf(b)];
	return one !== null && other !== null && (one[0] > other[1] || other[0] > one[1]);
}
