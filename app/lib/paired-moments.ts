import { gapOfMeans } from "#app/lib/moments.ts";

/**
 * Count, sums and centred mixed moments over operations that answered in two seasons: `before` and `now`. `mYY` is the sum
 * of products of the two seasons' deviations of y, each from its own mean; `mYX` of y before with x now, `mXY` of x
 * before with y now, `mXX` of x with x. What each season holds by itself is in its own `Moments`.
 * Units: as the measure declares them; the moments in those units multiplied.
 */
export type PairedMoments = {
	n: number;
	sumYBefore: number;
	sumXBefore: number;
	sumYNow: number;
	sumXNow: number;
	mYY: number;
	mYX: number;
	mXY: number;
	mXX: number;
};

/** One operation's answers in both seasons. */
export type PairedAnswers = { yBefore: number; xBefore: number; yNow: number; xNow: number };

/** The paired moments of nobody: adding them changes nothing. */
export const emptyPairedMoments: PairedMoments = Object.freeze({
	n: 0,
	sumYBefore: 0,
	sumXBefore: 0,
	sumYNow: 0,
	sumXNow: 0,
	mYY: 0,
	mYX: 0,
	mXY: 0,
	mXX: 0,
});

/**
 * Adds the paired moments of two sets of different operations, by the same pairwise update as `addMoments`.
 * @throws {RangeError} when a count is negative or not whole, or a sum is not finite.
 */
export function addPairedMoments(a: PairedMoments, b: PairedMoments): PairedMoments {
	requirePaired(a);
	requirePaired(b);
	if (a.n === 0) return pick(b);
	if (b.n === 0) return pick(a);
	const n = a.n + b.n;
	const share = a.n * (b.n / n);
	const gap = (sum: "sumYBefore" | "sumXBefore" | "sumYNow" | "sumXNow") => gapOfMeans(a.n, a[sum], b.n, b[sum]);
	const [yBefore, xBefore, yNow, xNow] = [gap("sumYBefore"), gap("sumXBefore"), gap("sumYNow"), gap("sumXNow")];
	return {
		n,
		sumYBefore: a.sumYBefore + b.sumYBefore,
		sumXBefore: a.sumXBefore + b.sumXBefore,
		sumYNow: a.sumYNow + b.sumYNow,
		sumXNow: a.sumXNow + b.sumXNow,
		mYY: a.mYY + b.mYY + yBefore * yNow * share,
		mYX: a.mYX + b.mYX + yBefore * xNow * share,
		mXY: a.mXY + b.mXY + xBefore * yNow * share,
		mXX: a.mXX + b.mXX + xBefore * xNow * share,
	};
}

/** The paired moments of a list of operations, by two passes. */
export function pairedMomentsOf(operations: Iterable<PairedAnswers>): PairedMoments {
	const all = [...operations];
	const moments: PairedMoments = { ...emptyPairedMoments, n: all.length };
	for (const { yBefore, xBefore, yNow, xNow } of all) {
		moments.sumYBefore += yBefore;
		moments.sumXBefore += xBefore;
		moments.sumYNow += yNow;
		moments.sumXNow += xNow;
	}
	const mean = (sum: number) => sum / all.length;
	for (const operation of all) {
		const yBefore = operation.yBefore - mean(moments.sumYBefore);
		const xBefore = operation.xBefore - mean(moments.sumXBefore);
		const yNow = operation.yNow - mean(moments.sumYNow);
		const xNow = operation.xNow - mean(moments.sumXNow);
		moments.mYY += yBefore * yNow;
		moments.mYX += yBefore * xNow;
		moments.mXY += xBefore * yNow;
		moments.mXX += xBefore * xNow;
	}
	requirePaired(moments);
	return moments;
}

function pick({ n, sumYBefore, sumXBefore, sumYNow, sumXNow, mYY, mYX, mXY, mXX }: PairedMoments): PairedMoments {
	return { n, sumYBefore, sumXBefore, sumYNow, sumXNow, mYY, mYX, mXY, mXX };
}

function requirePaired(row: PairedMoments): void {
	const moments = pick(row);
	if (!Number.isInteger(moments.n) || moments.n < 0)
		throw new RangeError(`moments cannot be of ${moments.n} operations`);
	if (!Object.values(moments).every(Number.isFinite)) throw new RangeError("sums and moments must be finite");
}
