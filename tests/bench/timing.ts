/**
 * Milliseconds of each of several works, the median of some runs. The works take turns, so that a machine that others use
 * slows all of them alike; a first turn warms up and is not counted.
 */
export async function medians<Name extends string>(
	runs: number,
	works: Record<Name, () => Promise<number | void>>,
): Promise<Record<Name, number>> {
	const taken = new Map<string, number[]>();
	for (let run = 0; run <= runs; run++) {
		for (const [name, work] of Object.entries<() => Promise<number | void>>(works)) {
			const began = performance.now();
			const told = await work();
			if (run > 0) taken.set(name, [...(taken.get(name) ?? []), told ?? performance.now() - began]);
		}
	}
	return Object.fromEntries([...taken].map(([name, times]) => [name, median(times)])) as Record<Name, number>;
}

export function median(values: readonly number[]): number {
	const sorted = values.toSorted((a, b) => a - b);
	const middle = sorted.length >> 1;
	return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

/** The power of size with which times grow: the slope of a straight line through both logarithms. */
export function growthExponent(points: readonly { size: number; time: number }[]): number {
	const logs = points.map(({ size, time }) => ({ x: Math.log(size), y: Math.log(time) }));
	const mean = (key: "x" | "y") => logs.reduce((sum, point) => sum + point[key], 0) / logs.length;
	const [x, y] = [mean("x"), mean("y")];
	const covariance = logs.reduce((sum, point) => sum + (point.x - x) * (point.y - y), 0);
	return covariance / logs.reduce((sum, point) => sum + (point.x - x) ** 2, 0);
}
