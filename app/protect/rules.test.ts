import { describe, expect, test } from "vitest";
import { ownCells } from "./levels.ts";
import { checkRules, defaultRules, ownReasons } from "./rules.ts";
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

	test("a network cannot set fewer than three owners or a percentage of nothing", () => {
		expect(() => checkRules({ minimumOwners: 2, dominancePercent: 10 })).toThrow(RangeError);
		expect(() => checkRules({ minimumOwners: 4.5, dominancePercent: 10 })).toThrow(RangeError);
		expect(() => checkRules({ minimumOwners: 5, dominancePercent: 0 })).toThrow(RangeError);
		expect(() => checkRules({ minimumOwners: 5, dominancePercent: Number.NaN })).toThrow(RangeError);
		expect(checkRules({ minimumOwners: 3, dominancePercent: 10 })).toEqual({ minimumOwners: 3, dominancePercent: 10 });
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
