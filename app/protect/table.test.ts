import { expect, test } from "vitest";
import { buildTable, cellKey } from "./table.ts";

const share = (total: number) => ({ total, top1: total, top2: 0 });
const small = (region: number, overlapsOver?: string[]) =>
	buildTable({
		hierarchies: [
			{ name: "area", root: "region", parent: { a: "region", b: "region" } },
			{ name: "crop", root: "all", parent: { apple: "all", plum: "all" } },
		],
		quantities: [{ key: "q", overlapsOver }],
		cells: [
			["a", "apple", 3],
			["a", "plum", 2],
			["a", "all", overlapsOver ? 4 : 5],
			["b", "apple", 1],
			["b", "all", 1],
			["region", "apple", 4],
			["region", "plum", 2],
			["region", "all", region],
		].map(([area, crop, total]) => ({
			coordinates: [String(area), String(crop)],
			owners: 1,
			quantities: { q: share(Number(total)) },
		})),
	});

test("a table is completed with cells that have no growers", () => {
	const table = small(6);
	expect(table.cells).toHaveLength(9);
	expect(table.cells.find(({ key }) => key === cellKey("b", "plum"))!.owners).toBe(0);
});

test("each inner code makes one equation for each code of the other tree", () => {
	const table = small(6);
	const told = table.equations.map((e) => [e.total, ...e.parts].map((i) => table.cells[i]!.key).join(" "));
	expect(told).toContain("region|plum a|plum b|plum");
	expect(told).toContain("b|all b|apple b|plum");
	expect(told).toHaveLength(3 + 3);
});

test("cells that do not add up are refused", () => {
	expect(() => small(7)).toThrow("does not add up");
});

test("operations with two crops may be fewer than the sum, yet never fewer than one crop has", () => {
	expect(small(5, ["crop"]).cells).toHaveLength(9);
	expect(() => small(7, ["crop"])).toThrow("does not add up");
});

const build = (cells: Parameters<typeof buildTable>[0]["cells"]) => () =>
	buildTable({ hierarchies: [{ name: "area", root: "r", parent: { a: "r" } }], quantities: [{ key: "q" }], cells });

test("a cell outside the trees, given twice or with impossible shares is refused", () => {
	const a = { coordinates: ["a"], owners: 1, quantities: { q: share(1) } };
	expect(build([{ ...a, coordinates: ["z"] }])).toThrow("lies outside area");
	expect(build([a, a])).toThrow("given twice");
	expect(build([{ ...a, quantities: { q: { total: 1, top1: 2, top2: 0 } } }])).toThrow("owner shares");
	expect(build([{ ...a, quantities: { q: { total: Number.NaN, top1: 0, top2: 0 } } }])).toThrow("owner shares");
});
