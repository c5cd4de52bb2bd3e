// Reads the stored disclosure tables into the product's own table model.
import { readFile } from "node:fs/promises";
import { parse } from "csv-parse/sync";
import type { ProtectionRules } from "#app/protect/rules.ts";
import { buildTable, type ProtectionTable } from "#app/protect/table.ts";

interface StoredOptimum {
	optimal_total: number;
	pattern: number[];
	primary_intervals: Record<string, [number | null, number | null]>;
}

export interface StoredTable {
	rule: { p_percent: number; min_contributors: number };
	dimensions: { name: string; root: string; parent: Record<string, string> }[];
	cells: {
		i: number;
		coord: string[];
		value: number;
		n: number;
		top1: number;
		top2: number;
		protection: number;
		suppressible: boolean;
	}[];
	equations: { total: number; parts: number[] }[];
	expected: {
		primary: number[];
		audit_primary_only: { intervals: Record<string, [number | null, number | null]> };
		min_value: StoredOptimum;
		min_count: StoredOptimum;
	};
}

export const VALUE = "value";
/** Pure magnitude, as in the stored tables: adds up over every tree. */
export const VALUE_ONLY = [{ key: VALUE }];

export async function readStored(path: string): Promise<StoredTable> {
	return JSON.parse(await readFile(path, "utf8"));
}

/** The stored table as ours, and for each stored cell number its position in our table. */
export function tableOf(stored: StoredTable): { table: ProtectionTable; position: (cell: number) => number } {
	const table = buildTable({
		hierarchies: stored.dimensions,
		quantities: VALUE_ONLY,
		cells: stored.cells.map(({ coord, n, value, top1, top2 }) => ({
			coordinates: coord,
			owners: n,
			quantities: { [VALUE]: { total: value, top1, top2 } },
		})),
	});
	const byKey = new Map(table.cells.map((cell, index) => [cell.key, index]));
	return { table, position: (cell) => byKey.get(stored.cells[cell]!.coord.join("|"))! };
}

export function rulesOf(rule: StoredTable["rule"]): ProtectionRules {
	return { minimumOwners: rule.min_contributors, dominancePercent: rule.p_percent };
}

/** A plain two-way table with its margins in the last row and column, every cell with many owners. */
export function twoWay(cells: readonly (readonly number[])[]): ProtectionTable {
	const last = [cells.length - 1, cells[0]!.length - 1];
	const code = (d: number, at: number) => (at === last[d] ? "T" : String(at));
	const tree = (d: number) => ({
		name: d === 0 ? "row" : "column",
		root: "T",
		parent: Object.fromEntries(Array.from({ length: last[d]! }, (_, at) => [String(at), "T"])),
	});
	return buildTable({
		hierarchies: [tree(0), tree(1)],
		quantities: VALUE_ONLY,
		cells: cells.flatMap((row, r) =>
			row.map((total, c) => ({
				coordinates: [code(0, r), code(1, c)],
				owners: 100,
				quantities: { [VALUE]: { total, top1: 0, top2: 0 } },
			})),
		),
	});
}

/** Key of a zero-based row and column in `twoWay`. */
export function twoWayKey(cells: readonly (readonly number[])[], [row, column]: readonly number[]): string {
	return `${row === cells.length - 1 ? "T" : row}|${column === cells[0]!.length - 1 ? "T" : column}`;
}

interface CountyRow {
	county: string;
	category: string;
	value: string;
	n: string;
	top1: string;
	top2: string;
}

/** Counties named S01D1C01 by category, with district, state and nation added up from them. */
export async function readLarge(path: string): Promise<ProtectionTable> {
	const rows: CountyRow[] = parse(await readFile(path, "utf8"), { columns: true });
	const area: Record<string, string> = {};
	const category: Record<string, string> = {};
	const sums = new Map<string, { coordinates: string[]; n: number; total: number; top1: number; top2: number }>();
	for (const row of rows) {
		const district = row.county.slice(0, 5);
		const state = row.county.slice(0, 3);
		Object.assign(area, { [row.county]: district, [district]: state, [state]: "US" });
		category[row.category] = "all";
		for (const where of [row.county, district, state, "US"]) {
			for (const what of [row.category, "all"]) {
				const key = `${where}|${what}`;
				const sum = sums.get(key) ?? { coordinates: [where, what], n: 0, total: 0, top1: 0, top2: 0 };
				const largest = [sum.top1, sum.top2, Number(row.top1), Number(row.top2)].toSorted((a, b) => b - a);
				sum.n += Number(row.n);
				sum.total += Number(row.value);
				[sum.top1, sum.top2] = [largest[0]!, largest[1]!];
				sums.set(key, sum);
			}
		}
	}
	return buildTable({
		hierarchies: [
			{ name: "area", root: "US", parent: area },
			{ name: "category", root: "all", parent: category },
		],
		quantities: VALUE_ONLY,
		cells: [...sums.values()].map(({ coordinates, n, total, top1, top2 }) => ({
			coordinates,
			owners: n,
			quantities: { [VALUE]: { total, top1, top2 } },
		})),
	});
}
