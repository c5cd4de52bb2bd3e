import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { addMoments, emptyMoments, momentsOf, rawSums, sumMoments, type Moments } from "#app/lib/moments.ts";

const operation = fc.record({ y: fc.integer({ min: 0, max: 500_000 }), x: fc.integer({ min: 1, max: 500_000 }) });
const operations = fc.array(operation, { maxLength: 40 });

function expectAlike(actual: Moments, expected: Moments) {
	expect(actual.n).toBe(expected.n);
	for (const key of ["sumY", "sumX", "mYY", "mXX", "mXY"] as const) {
		const size = Math.max(1, Math.abs(expected[key]), Math.sqrt(expected.mYY * expected.mXX));
		expect(Math.abs(actual[key] - expected[key]) / size, key).toBeLessThan(1e-11);
	}
}

describe("adding moments", () => {
	test("any split gives the moments of all operations together", () => {
		fc.assert(
			fc.property(operations, fc.array(fc.nat(4), { minLength: 40, maxLength: 40 }), (all, places) => {
				const parts = [0, 1, 2, 3, 4].map((part) => momentsOf(all.filter((_, i) => places[i] === part)));
				expectAlike(sumMoments(parts), momentsOf(all));
			}),
		);
	});

	test("the order does not matter, nor how the additions are grouped", () => {
		fc.assert(
			fc.property(operations, operations, operations, (a, b, c) => {
				const [first, second, third] = [momentsOf(a), momentsOf(b), momentsOf(c)];
				expectAlike(addMoments(addMoments(first, second), third), addMoments(first, addMoments(third, second)));
			}),
		);
	});

	test("small spread beside large values keeps its digits, where plain sums of squares lose them all", () => {
		const far = 1e9;
		const parts = [1, 2, 3, 4].map((step) => momentsOf([{ y: far + step, x: 1 }]));
		expect(sumMoments(parts).mYY).toBe(5); // 1.5² + 0.5² + 0.5² + 1.5²
	});

	test("nobody adds nothing", () => {
		const some = momentsOf([{ y: 3, x: 4 }]);
		expect(addMoments(some, emptyMoments)).toEqual(some);
		expect(addMoments(emptyMoments, some)).toEqual(some);
		expect(sumMoments([])).toEqual(emptyMoments);
	});

	test("a half operation or an infinite sum is refused", () => {
		expect(() => addMoments({ ...emptyMoments, n: 0.5 }, emptyMoments)).toThrow(RangeError);
		expect(() => addMoments({ ...emptyMoments, n: 1, sumY: Infinity }, emptyMoments)).toThrow(RangeError);
		expect(() => momentsOf([{ y: Number.NaN, x: 1 }])).toThrow(RangeError);
	});
});

test("plain sums come back from centred moments", () => {
	const moments = momentsOf([
		{ y: 1, x: 2 },
		{ y: 3, x: 5 },
	]);
	expect(rawSums(moments)).toEqual({ sumYY: 10, sumXX: 29, sumXY: 17 });
	expect(rawSums(emptyMoments)).toEqual({ sumYY: 0, sumXX: 0, sumXY: 0 });
});
