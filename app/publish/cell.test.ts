import { expect, test } from "vitest";
import { type Cell, lookOf, orderCells } from "./cell.ts";

const blank = {
	kind: "county",
	stateFips: "19",
	lower: null,
	upper: null,
	quartiles: null,
	respondentsBand: null,
} as const;
function cell(areaName: string, fields: Partial<Cell>): Cell {
	return { ...blank, areaKey: areaName, areaName, status: "shown", value: null, steadiness: null, ...fields };
}
const cells = [
	cell("Cedar", { status: "withheld" }),
	cell("Adair", { status: "withheld" }),
	cell("Boone", { value: 20, steadiness: "steady" }),
	cell("Dallas", { value: 5, steadiness: "care" }),
	cell("Emmet", { steadiness: "rough" }),
	cell("Floyd", { status: "no_growers" }),
];
const names = (order: Parameters<typeof orderCells>[1]) =>
	orderCells(cells, order, (a, b) => a.localeCompare(b)).map(({ areaName }) => areaName);

test("withheld areas stand last and by name, whichever way a table is sorted by value", () => {
	expect(names({ key: "value", direction: "asc" })).toEqual(["Dallas", "Boone", "Emmet", "Floyd", "Adair", "Cedar"]);
	expect(names({ key: "value", direction: "desc" })).toEqual(["Boone", "Dallas", "Emmet", "Floyd", "Adair", "Cedar"]);
});

test("sorted by name, every area stands where its name puts it", () => {
	expect(names({ key: "area", direction: "desc" })).toEqual(["Floyd", "Emmet", "Dallas", "Cedar", "Boone", "Adair"]);
});

test("a shown cell without this measure's figure is told apart from a rough one", () => {
	expect(lookOf(cell("A", {}))).toBe("no_figure");
	expect(lookOf(cell("A", { steadiness: "rough" }))).toBe("rough");
	expect(lookOf(cell("A", { status: "withheld", value: 3, steadiness: "steady" }))).toBe("withheld");
});
