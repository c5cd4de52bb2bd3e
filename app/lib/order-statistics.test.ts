import { expect, test } from "vitest";
import { medianOf, quantileOf } from "#app/lib/order-statistics.ts";

test("quartiles are read between neighbours", () => {
	expect([0, 0.25, 0.5, 0.75, 1].map((p) => quantileOf([40, 10, 30, 20], p))).toEqual([10, 17.5, 25, 32.5, 40]);
	expect(medianOf([7])).toBe(7);
	expect(medianOf([9, 1, 5])).toBe(5);
});

test("an empty list, a share above 1 and a value that is no number are refused", () => {
	expect(() => medianOf([])).toThrow(RangeError);
	expect(() => quantileOf([1], 1.1)).toThrow(RangeError);
	expect(() => quantileOf([1, Number.NaN], 0.5)).toThrow(RangeError);
});
