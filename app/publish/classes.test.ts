import * as fc from "fast-check";
import { expect, test } from "vitest";
import { classesOfCells, classOf, naturalBreaks } from "./classes.ts";

test("values that lie in clumps fall into those clumps", () => {
	expect(naturalBreaks([1, 2, 1, 30, 31, 90], 0, 3)).toEqual([
		{ from: 1, to: 2, count: 3 },
		{ from: 30, to: 31, count: 2 },
		{ from: 90, to: 90, count: 1 },
	]);
});

test("fewer different values than classes make a class each; no value makes none", () => {
	expect(naturalBreaks([7, 7, 7], 0)).toEqual([{ from: 7, to: 7, count: 3 }]);
	expect(naturalBreaks([], 0)).toEqual([]);
});

test("each value lies in exactly one class, classes ascend and never show the same number twice", () => {
	fc.assert(
		fc.property(
			fc.array(fc.double({ min: 0, max: 100, noNaN: true }), { maxLength: 60 }),
			fc.nat({ max: 2 }),
			(values, decimals) => {
				const classes = naturalBreaks(values, decimals);
				expect(classes.length).toBeLessThanOrEqual(5);
				expect(classes.reduce((sum, { count }) => sum + count, 0)).toBe(values.length);
				for (const [index, { from, to }] of classes.entries()) {
					expect(from).toBeLessThanOrEqual(to);
					const next = classes[index + 1];
					if (next) expect(to).toBeLessThan(next.from);
				}
				for (const value of values) expect(classOf(value, classes, decimals)).not.toBeNull();
			},
		),
	);
});

test("a withheld cell takes no part in the classes, even if a number came with it", () => {
	const shared = {
		areaKey: "1",
		areaName: "A",
		kind: "county",
		stateFips: "19",
		lower: null,
		upper: null,
		quartiles: null,
		respondentsBand: null,
	} as const;
	const cells = [
		{ ...shared, status: "shown", value: 10, steadiness: "steady" } as const,
		{ ...shared, status: "withheld", value: 99, steadiness: "steady" } as const,
	];
	expect(classesOfCells(cells, 0)).toEqual([{ from: 10, to: 10, count: 1 }]);
});
