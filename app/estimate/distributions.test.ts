import * as fc from "fast-check";
import { expect, test } from "vitest";
import { betaProbability, betaQuantile, normal975, tQuantile } from "#app/estimate/distributions.ts";

// SciPy 1.10 `stats.t.ppf` and `stats.beta.ppf`; tables in textbooks print the same to three digits.
test.each([
	[1, 12.706204736174694],
	[2, 4.302652729749462],
	[197, 1.9720790337785026],
	[2142, 1.9610721028783409],
])("the 97.5 percent point of t with %d degrees of freedom", (df, expected) => {
	expect(tQuantile(0.975, df) / expected).toBeCloseTo(1, 11);
});

test("a beta quantile", () => {
	expect(betaQuantile(0.025, 3, 8)).toBeCloseTo(0.06673951117773447, 13);
	expect(betaQuantile(0, 3, 8)).toBe(0);
	expect(betaQuantile(1, 3, 8)).toBe(1);
});

test("t is symmetric and tends to the normal", () => {
	expect(tQuantile(0.025, 7)).toBeCloseTo(-tQuantile(0.975, 7), 12);
	expect(tQuantile(0.5, 7)).toBe(0);
	expect(tQuantile(0.975, 1e7)).toBeCloseTo(normal975, 5);
});

test("quantile and probability undo each other", () => {
	const shape = fc.double({ min: 0.5, max: 400, noNaN: true });
	fc.assert(
		fc.property(fc.double({ min: 0.001, max: 0.999, noNaN: true }), shape, shape, (p, a, b) => {
			expect(Math.abs(betaProbability(betaQuantile(p, a, b), a, b) - p)).toBeLessThan(1e-9);
		}),
	);
});

test("what has no answer is refused", () => {
	expect(() => tQuantile(0.975, 0)).toThrow(RangeError);
	expect(() => tQuantile(1, 5)).toThrow(RangeError);
	expect(() => betaQuantile(1.1, 1, 1)).toThrow(RangeError);
	expect(() => betaProbability(0.5, 0, 1)).toThrow(RangeError);
});
