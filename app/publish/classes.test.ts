import * as fc from "fast-check";
import { expect, test } from "vitest";
import { stepsOfUnit } from "./class-steps.ts";
import { classesOfCells, classOf, fixedClasses, naturalBreaks } from "./classes.ts";

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
	expect(classesOfCells(cells, { unit: "percent", decimals: 0 })).toEqual([{ from: 10, to: 10, count: 1 }]);
});

const ranges = (values: number[], decimals: number, unit: Parameters<typeof stepsOfUnit>[0]) =>
	fixedClasses(values, decimals, stepsOfUnit(unit)).map(({ from, to, count }) => [from, to, count]);

test("shares of a hundred have the same five classes on every map, each edge in one of them", () => {
	expect(ranges([0, 19.6, 20, 100], 0, "percent")).toEqual([
		[0, 19, 1],
		[20, 39, 2],
		[40, 59, 0],
		[60, 79, 0],
		[80, 100, 1],
	]);
	expect(ranges([3], 1, "percent").map(([from, to]) => [from, to])).toEqual([
		[0, 19.9],
		[20, 39.9],
		[40, 59.9],
		[60, 79.9],
		[80, 100],
	]);
});

test("days are told by whole weeks of the year, or by as many weeks as it takes", () => {
	// Day 1 to 7 is the first week: day 99 and day 112 are the first and the last of two weeks, the 15th and the 16th.
	expect(ranges([99, 112], 0, "day")).toEqual([
		[99, 105, 1],
		[106, 112, 1],
	]);
	expect(ranges([99, 140], 0, "day")).toEqual([
		[99, 112, 1],
		[113, 126, 0],
		[127, 140, 1],
	]);
});

test("other quantities have round steps, and what lies beyond the last step is in the last class", () => {
	expect(ranges([12.4, 48], 1, "lb_per_tree")).toEqual([
		[10, 19.9, 1],
		[20, 29.9, 0],
		[30, 39.9, 0],
		[40, 49.9, 1],
	]);
	expect(ranges([230], 0, "percent_of_normal").at(-1)).toEqual([140, 230, 1]);
	expect(ranges([], 0, "percent")).toEqual([]);
});

test("with fixed steps of any unit each value lies in exactly one of at most five classes, which ascend", () => {
	const units = ["percent", "percent_of_normal", "lb_per_tree", "lb", "fahrenheit", "score", "day"] as const;
	fc.assert(
		fc.property(
			fc.constantFrom(...units),
			fc.array(fc.double({ min: 0, max: 366, noNaN: true }), { minLength: 1, maxLength: 40 }),
			fc.nat({ max: 2 }),
			(unit, values, decimals) => {
				const classes = fixedClasses(values, decimals, stepsOfUnit(unit));
				expect(classes.length).toBeLessThanOrEqual(5);
				expect(classes.reduce((sum, { count }) => sum + count, 0)).toBe(values.length);
				for (const [index, { from, to }] of classes.entries()) {
					expect(from).toBeLessThanOrEqual(to);
					const next = classes[index + 1];
					if (next) expect(to).toBeLessThan(next.from);
				}
			},
		),
	);
});
