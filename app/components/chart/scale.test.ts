import fc from "fast-check";
import { expect, test } from "vitest";
import { placeOn, scaleOf } from "./scale.ts";

test("an axis of shares begins at zero and ends at a round number above the largest", () => {
	expect(scaleOf([41, 62.5], { zero: true })).toEqual({ from: 0, to: 80, ticks: [0, 20, 40, 60, 80] });
});

test("an axis of days has ticks a week apart", () => {
	expect(scaleOf([118, 139], { days: true, wanted: 3 })).toEqual({
		from: 112,
		to: 140,
		ticks: [112, 119, 126, 133, 140],
	});
});

test("small values keep plain ticks", () => {
	expect(scaleOf([0.05, 0.3], { zero: true }).ticks).toEqual([0, 0.1, 0.2, 0.3]);
});

test("one value, or zero alone, still makes an axis", () => {
	expect(scaleOf([0], { zero: true })).toEqual({ from: 0, to: 0.5, ticks: [0, 0.5] });
	expect(scaleOf([7])).toMatchObject({ from: 6, to: 8 });
});

const holds = (values: number[], days: boolean, zero: boolean) => {
	const scale = scaleOf(values, { zero, days });
	const place = placeOn(scale, 10, 350);
	expect(scale.ticks.length).toBeLessThan(12);
	for (const one of values) {
		expect(one).toBeGreaterThanOrEqual(scale.from - 1e-9 * Math.abs(scale.from));
		expect(one).toBeLessThanOrEqual(scale.to + 1e-9 * Math.abs(scale.to));
		expect(place(one)).toBeGreaterThanOrEqual(10);
		expect(place(one)).toBeLessThanOrEqual(350);
	}
};
const some = (value: fc.Arbitrary<number>) => fc.array(value, { minLength: 1, maxLength: 8 });

test("every value lies within its axis, and its place within the drawing", () => {
	const thousandths = fc.integer({ min: -1e9, max: 1e9 }).map((value) => value / 1000);
	fc.assert(fc.property(some(thousandths), fc.boolean(), (values, zero) => holds(values, false, zero)));
	fc.assert(fc.property(some(fc.integer({ min: 1, max: 366 })), (values) => holds(values, true, false)));
});
