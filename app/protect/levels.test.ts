import { expect, test } from "vitest";
import { ownCells } from "./levels.ts";
import { defaultRules } from "./rules.ts";
import { buildTable } from "./table.ts";

const share = (...amounts: number[]) => ({
	total: amounts.reduce((a, b) => a + b, 0),
	top1: amounts[0] ?? 0,
	top2: amounts[1] ?? 0,
});
const cell = (area: string, ...amounts: number[]) => ({
	coordinates: [area],
	owners: amounts.length,
	quantities: { lb: share(...amounts) },
});
const table = buildTable({
	hierarchies: [{ name: "area", root: "all", parent: { many: "all", few: "all" } }],
	quantities: [{ key: "lb" }],
	cells: [cell("all", 100, 90, 80, 80, 70, 60, 50, 40), cell("many", 90, 80, 70, 60, 50, 40), cell("few", 100, 80)],
});
const levels = (keptBack?: Map<string, Record<string, number>>) =>
	Object.fromEntries(
		ownCells(table, defaultRules, keptBack).map(({ index, reasons, levels: of }) => [
			table.cells[index]!.key,
			[reasons.join(" "), of.lb],
		]),
	);

test("a cell that only a revision keeps back asks for the room of the change and for no more", () => {
	expect(levels()).toEqual({ few: ["too_few_owners dominated", 10] });
	expect(levels(new Map([["many", { lb: 0 }]]))).toMatchObject({ many: ["revision", 0] });
	expect(levels(new Map([["many", { lb: 7 }]]))).toMatchObject({ many: ["revision", 7] });
});

test("a cell with reasons of its own keeps the wider room", () => {
	expect(levels(new Map([["few", { lb: 3 }]]))).toEqual({ few: ["too_few_owners dominated revision", 10] });
	expect(levels(new Map([["few", { lb: 30 }]]))).toEqual({ few: ["too_few_owners dominated revision", 30] });
});
