import * as fc from "fast-check";
import { expect, test } from "vitest";
import { preciseQuotient, preciseZero, sumOfProducts } from "#app/lib/precise.ts";

const whole = fc.integer({ min: -(2 ** 50), max: 2 ** 50 });

test("a sum of products of large whole numbers is what whole numbers of any length give", () => {
	fc.assert(
		fc.property(fc.array(fc.tuple(whole, whole), { maxLength: 20 }), (pairs) => {
			const exact = pairs.reduce((sum, [a, b]) => sum + BigInt(a) * BigInt(b), 0n);
			const { high, low } = sumOfProducts(pairs);
			const miss = exact - BigInt(high) - BigInt(low);
			const size = pairs.reduce((sum, [a, b]) => sum + Math.abs(a * b), 0);
			expect(Math.abs(Number(miss))).toBeLessThanOrEqual(size * 1e-30);
		}),
	);
});

test("what is left after large terms cancel keeps its digits", () => {
	const { high } = sumOfProducts([
		[1e9 + 1, 1e9 - 1],
		[1e9, -1e9],
	]);
	expect(high).toBe(-1);
	expect(sumOfProducts([])).toEqual(preciseZero);
});

test("a quotient's second part is what the first lost", () => {
	const third = preciseQuotient({ high: 1, low: 0 }, { high: 3, low: 0 });
	expect(third.high).toBe(1 / 3);
	// 1 / 3 in a double lies a third of 2^-54 below a third.
	expect(third.low).toBe(2 ** -54 / 3);
});
