/** A number kept as the sum of two, which together hold about 32 digits. */
export type Precise = { high: number; low: number };

export const preciseZero: Precise = Object.freeze({ high: 0, low: 0 });

/**
 * Sum of products, worked out with twice the digits of a plain sum: what is left after large terms have cancelled is
 * still right. Terms must stay below 1e300 in size, or nothing finite comes back.
 * Source: Ogita, Rump and Oishi, Accurate sum and dot product (2005), algorithm Dot2, from memory; the product's rounding
 * by Dekker's splitting (1971). Proved by the property test beside this file against whole numbers of any length.
 */
export function sumOfProducts(pairs: Iterable<readonly [number, number]>): Precise {
	let high = 0;
	let low = 0;
	for (const [a, b] of pairs) {
		const product = a * b;
		const sum = high + product;
		const part = sum - high;
		low += high - (sum - part) + (product - part) + roundingOf(a, b, product);
		high = sum;
	}
	return normalized(high, low);
}

/** a / b, with the digits that one number cannot hold. @param b not 0. */
export function preciseQuotient(a: Precise, b: Precise): Precise {
	const high = a.high / b.high;
	const rest = sumOfProducts([
		[a.high, 1],
		[high, -b.high],
		[a.low, 1],
		[high, -b.low],
	]);
	return normalized(high, (rest.high + rest.low) / b.high);
}

function normalized(high: number, low: number): Precise {
	const sum = high + low;
	return { high: sum, low: high - sum + low };
}

/** What a product lost when it was rounded. */
function roundingOf(a: number, b: number, product: number): number {
	const [aHigh, aLow] = halves(a);
	const [bHigh, bLow] = halves(b);
	return aLow * bLow - (product - aHigh * bHigh - aLow * bHigh - aHigh * bLow);
}

/** Two numbers of half the digits each, whose products are exact. */
function halves(a: number): [high: number, low: number] {
	const shifted = 134_217_729 * a; // 2^27 + 1
	const high = shifted - (shifted - a);
	return [high, a - high];
}
