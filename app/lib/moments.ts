import { sumOfProducts } from "#app/lib/precise.ts";

/**
 * Count, sums and centred second moments of two quantities over a set of operations. `mYY` and `mXX` are sums of
 * squared deviations from the set's own means, `mXY` the sum of their products. Centred moments lose no digits when
 * a few large operations stand beside many small ones; plain sums of squares do.
 * Units: y and x as the measure declares (canonical units); the moments in those units squared.
 */
export type Moments = { n: number; sumY: number; sumX: number; mYY: number; mXX: number; mXY: number };

/** The moments of nobody: adding them changes nothing. */
export const emptyMoments: Moments = Object.freeze({ n: 0, sumY: 0, sumX: 0, mYY: 0, mXX: 0, mXY: 0 });

/**
 * Adds the moments of two sets of different operations: counts and sums add; second moments add with the correction for the
 * distance between the two means (the pairwise update).
 * @returns the moments that one pass over all operations of both would give, in any order and any split, to rounding.
 * @throws {RangeError} when a count is negative or not whole, or a sum is not finite.
 * Source: Chan, Golub and LeVeque, Updating formulae and a pairwise algorithm for computing sample variances (1979);
 * formula from memory, proved by the property test beside this file against a two-pass computation.
 */
export function addMoments(a: Moments, b: Moments): Moments {
	requireMoments(a);
	requireMoments(b);
	if (a.n === 0) return pickMoments(b);
	if (b.n === 0) return pickMoments(a);
	const n = a.n + b.n;
	const gapY = gapOfMeans(a.n, a.sumY, b.n, b.sumY);
	const gapX = gapOfMeans(a.n, a.sumX, b.n, b.sumX);
	const share = a.n * (b.n / n);
	return {
		n,
		sumY: a.sumY + b.sumY,
		sumX: a.sumX + b.sumX,
		mYY: a.mYY + b.mYY + gapY * gapY * share,
		mXX: a.mXX + b.mXX + gapX * gapX * share,
		mXY: a.mXY + b.mXY + gapY * gapX * share,
	};
}

/**
 * How far the mean of one set lies above another's. Two means of 1e9 that are 0.1 apart differ in their last digits only,
 * so the sums are compared before they are divided.
 */
export function gapOfMeans(n: number, sum: number, otherN: number, otherSum: number): number {
	const { high } = sumOfProducts([
		[otherSum, n],
		[sum, -otherN],
	]);
	return high / (n * otherN);
}

/** Adds the moments of any number of sets of different operations. @returns `emptyMoments` for none. */
export function sumMoments(sets: Iterable<Moments>): Moments {
	let all = emptyMoments;
	for (const moments of sets) all = addMoments(all, moments);
	return all;
}

/**
 * The moments of a list of operations, by two passes. For answers already in memory and for checks; the
 * database makes the same numbers with one GROUP BY.
 * @param operations one entry an operation, plantings of the crop summed before.
 */
export function momentsOf(operations: Iterable<{ y: number; x: number }>): Moments {
	const all = [...operations];
	const n = all.length;
	if (n === 0) return emptyMoments;
	let sumY = 0;
	let sumX = 0;
	for (const { y, x } of all) {
		sumY += y;
		sumX += x;
	}
	const moments: Moments = { n, sumY, sumX, mYY: 0, mXX: 0, mXY: 0 };
	for (const { y, x } of all) {
		const gapY = y - sumY / n;
		const gapX = x - sumX / n;
		moments.mYY += gapY * gapY;
		moments.mXX += gapX * gapX;
		moments.mXY += gapY * gapX;
	}
	requireMoments(moments);
	return moments;
}

/**
 * Plain sums of squares and products from centred moments: `sumYY = mYY + sumY²/n`, and so on. For comparison with
 * formulas printed in plain sums; the estimators use the centred moments, which keep more digits.
 */
export function rawSums(moments: Moments): { sumYY: number; sumXX: number; sumXY: number } {
	if (moments.n === 0) return { sumYY: 0, sumXX: 0, sumXY: 0 };
	return {
		sumYY: moments.mYY + (moments.sumY * moments.sumY) / moments.n,
		sumXX: moments.mXX + (moments.sumX * moments.sumX) / moments.n,
		sumXY: moments.mXY + (moments.sumX * moments.sumY) / moments.n,
	};
}

function pickMoments({ n, sumY, sumX, mYY, mXX, mXY }: Moments): Moments {
	return { n, sumY, sumX, mYY, mXX, mXY };
}

function requireMoments({ n, sumY, sumX, mYY, mXX, mXY }: Moments): void {
	if (!Number.isInteger(n) || n < 0) throw new RangeError(`moments cannot be of ${n} operations`);
	if (![sumY, sumX, mYY, mXX, mXY].every(Number.isFinite)) throw new RangeError("sums and moments must be finite");
}
