import { describe, expect, test } from "vitest";
import { ownCells } from "./levels.ts";
import { checkRules, defaultRules, ownReasons, shortfall } from "./rules.ts";
import { buildTable, type OwnerShare, type TableCell } from "./table.ts";

const cell = (owners: number, lb: OwnerShare, trees: OwnerShare = lb): TableCell => ({
	key: "55001|plum",
	coordinates: ["55001", "plum"],
	owners,
	quantities: { lb, trees },
});
const even = (owners: number, each: number): OwnerShare => ({
	total: owners * each,
	top1: owners > 0 ? each : 0,
	top2: owners > 1 ? each : 0,
});

describe("own reasons", () => {
	test("four owners are too few and five are enough", () => {
		expect(ownReasons(cell(4, even(4, 10)), defaultRules)).toEqual(["too_few_owners"]);
		expect(ownReasons(cell(5, even(5, 10)), defaultRules)).toEqual([]);
	});

	test("a cell without growers is a published zero", () => {
		expect(ownReasons(cell(0, even(0, 0)), defaultRules)).toEqual([]);
	});

	test("dominance in one quantity withholds the whole cell", () => {
		const dominated = { total: 1050, top1: 1000, top2: 20 };
		expect(ownReasons(cell(5, even(5, 10), dominated), defaultRules)).toEqual(["dominated"]);
	});

	test("a remainder of exactly p% of the largest is enough, also when sums were rounded", () => {
		expect(ownReasons(cell(6, { total: 130, top1: 100, top2: 20 }, even(6, 1)), defaultRules)).toEqual([]);
		expect(ownReasons(cell(6, { total: 0.1 + 0.2 + 1.2 - 0.2, top1: 1, top2: 0.2 }), defaultRules)).toEqual([]);
	});

	test("five owners who lost everything are shown with their zero", () => {
		expect(ownReasons(cell(5, even(5, 0), even(5, 10)), defaultRules)).toEqual([]);
	});

	test("a measure that only three of nine owners answered withholds the cell", () => {
		expect(ownReasons({ ...cell(9, even(9, 10)), fewestOwners: 3 }, defaultRules)).toEqual(["too_few_owners"]);
	});

	test("nine owners who all gave the same answer to a sensitive question withhold the cell", () => {
		expect(ownReasons({ ...cell(9, even(9, 10)), uniform: true }, defaultRules)).toEqual(["uniform"]);
	});

	test("an (n, k) rule must leave owners over whom it does not count, and a public factor room", () => {
		const largest = { owners: 2, percent: 80 };
		expect(checkRules({ ...defaultRules, largest, publicFactor: 2 })).toMatchObject({ largest, publicFactor: 2 });
		for (const owners of [0, 5, 1.5]) {
			expect(() => checkRules({ ...defaultRules, largest: { owners, percent: 80 } })).toThrow("largest.owners");
		}
		for (const percent of [0, 100]) {
			expect(() => checkRules({ ...defaultRules, largest: { owners: 2, percent } })).toThrow("largest.percent");
		}
		expect(() => checkRules({ ...defaultRules, publicFactor: 1.1 })).toThrow("publicFactor");
		expect(() => checkRules({ ...defaultRules, largest, publicFactor: 1.25 })).toThrow("publicFactor");
	});

	test("a network cannot set fewer than three owners or a percentage of nothing", () => {
		expect(() => checkRules({ minimumOwners: 2, dominancePercent: 10 })).toThrow(RangeError);
		expect(() => checkRules({ minimumOwners: 4.5, dominancePercent: 10 })).toThrow(RangeError);
		expect(() => checkRules({ minimumOwners: 5, dominancePercent: 0 })).toThrow(RangeError);
		expect(() => checkRules({ minimumOwners: 5, dominancePercent: Number.NaN })).toThrow(RangeError);
		expect(checkRules({ minimumOwners: 3, dominancePercent: 10 })).toEqual({ minimumOwners: 3, dominancePercent: 10 });
	});
});

// A p so small that the p% rule says nothing.
const onlyLargest = (owners: number, percent: number) => ({
	minimumOwners: 3,
	dominancePercent: 1e-6,
	largest: { owners, percent },
});

// Handbook on Statistical Disclosure Control (Hundepool et al.), section 4.2.
describe("the handbook's examples", () => {
	const p10 = { minimumOwners: 3, dominancePercent: 10 };

	test("example 1: (1, 90) misses what p% finds", () => {
		const share = { total: 100_000, top1: 50_000, top2: 49_000, largest: 50_000 };
		expect(shortfall(share, onlyLargest(1, 90))).toBe(0);
		expect(shortfall(share, p10)).toBeCloseTo(4000, 9);
	});

	test("example 2: (2, 100/1.1) finds what p = 10 lets pass", () => {
		const share = { total: 110_000, top1: 52_000, top2: 50_000, largest: 102_000 };
		expect(shortfall(share, p10)).toBe(0);
		expect(shortfall(share, onlyLargest(2, 100 / 1.1))).toBeCloseTo(1.1 * 102_000 - 110_000, 6);
	});

	test("example 4: (1, 85) asks for an upper bound of 352.94", () => {
		const share = { total: 330, top1: 300, top2: 20, largest: 300 };
		expect(330 + shortfall(share, onlyLargest(1, 85))).toBeCloseTo(352.94117647058823, 9);
		expect(shortfall(share, p10)).toBeCloseTo(20, 9);
		expect(shortfall(share, { ...p10, largest: { owners: 1, percent: 85 } })).toBeCloseTo(22.941176470588232, 9);
	});

	test("waivers: the largest owner without one is guarded from the largest other one", () => {
		const share = { total: 1060, top1: 1000, top2: 50 };
		expect(shortfall(share, p10)).toBeCloseTo(100 - 10, 9);
		expect(shortfall({ ...share, guarded: { first: 50, other: 1000 } }, p10)).toBe(0);
		expect(shortfall({ ...share, total: 1054, guarded: { first: 50, other: 1000 } }, p10)).toBeCloseTo(1, 9);
	});

	test("a waiver takes nothing off the minimum of owners", () => {
		const waived = { ...even(4, 100), guarded: { first: 0, other: 100 } };
		expect(ownReasons(cell(4, waived), defaultRules)).toEqual(["too_few_owners"]);
	});
});

const table = (lb: OwnerShare, owners: number) =>
	buildTable({
		hierarchies: [{ name: "area", root: "region", parent: { a: "region", b: "region" } }],
		quantities: [{ key: "lb" }, { key: "operations", counted: true }],
		cells: [
			{ coordinates: ["a"], owners, quantities: { lb, operations: even(owners, 1) } },
			{ coordinates: ["b"], owners: 10, quantities: { lb: even(10, 50), operations: even(10, 1) } },
			{
				coordinates: ["region"],
				owners: owners + 10,
				quantities: {
					lb: { total: lb.total + 500, top1: Math.max(50, lb.top1), top2: 50 },
					operations: even(owners + 10, 1),
				},
			},
		],
	});

const levels = (lb: OwnerShare, owners: number) =>
	ownCells(table(lb, owners), defaultRules).find(({ index }) => table(lb, owners).cells[index]!.key === "a")?.levels;

describe("protection levels", () => {
	test("a dominated cell asks p% of the largest less the remainder", () => {
		expect(levels({ total: 1050, top1: 1000, top2: 20 }, 6)!.lb).toBeCloseTo(100 - 30, 9);
	});

	test("a cell with too few owners asks p% of the largest even where nobody dominates, and one of a count", () => {
		expect(levels(even(4, 30), 4)).toEqual({ lb: 3, operations: 1 });
	});

	test("too few owners who lost everything ask p% of the mean owner around them", () => {
		expect(levels(even(2, 0), 2)!.lb).toBeCloseTo(0.1 * (500 / 12), 9);
	});
});
