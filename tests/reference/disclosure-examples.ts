// Worked examples by what they hold, not by name, so that other values in the same layout are recomputed too.
import { feasibleIntervals } from "#app/protect/audit.ts";
import { shortfall } from "#app/protect/rules.ts";
import { Knowers } from "#app/protect/knowers.ts";
import { lossByCell } from "#app/protect/loss.ts";
import { chooseShields } from "#app/protect/shields.ts";
import type { Solver } from "#app/protect/solver.ts";
import type { ProtectionTable } from "#app/protect/table.ts";
import { twoWay, twoWayKey, VALUE } from "./disclosure-data.ts";
import type { Comparison } from "./verify/comparison.ts";

export interface Example {
	id: string;
	input: Record<string, unknown>;
	expected: Record<string, unknown>;
}

type Grid = number[][];
const rules = (percent: number) => ({ minimumOwners: 3, dominancePercent: percent });

/** Compares what the product computes of this example. @returns false when it computes none of it. */
export async function checkExample(solver: Solver, { input, expected }: Example, seen: Comparison): Promise<boolean> {
	if ("p10_sensitive" in expected) return checkDominance(input, expected, seen);
	if ("p10_protection_level_computed" in expected) return checkLevel(input, expected, seen);
	if (Array.isArray(input.published)) return checkSubtraction(solver, input, expected, seen);
	if (Array.isArray(input.rows) && "X11" in expected) return checkLetters(solver, input, expected, seen);
	if ("suppressed_bad" in input) return checkTwoPatterns(solver, input, expected, seen);
	if ("min_value_by_protection" in expected) return checkShields(solver, input, expected, seen);
	return false;
}

function checkDominance(input: Example["input"], expected: Example["expected"], seen: Comparison): boolean {
	const share = { total: Number(input.X), top1: Number(input.x1), top2: Number(input.x2) };
	const short = shortfall(share, rules(10));
	seen.holds(short > 0 === expected.p10_sensitive);
	if ("p10_protection_level_computed" in expected) seen.number(short, Number(expected.p10_protection_level_computed));
	return true;
}

function checkLevel(input: Example["input"], expected: Example["expected"], seen: Comparison): boolean {
	const parts = (input.contributions as number[]).toSorted((a, b) => b - a);
	const share = { total: parts.reduce((a, b) => a + b, 0), top1: parts[0]!, top2: parts[1] ?? 0 };
	seen.number(share.total, Number(expected.X));
	seen.number(shortfall(share, rules(10)), Number(expected.p10_protection_level_computed));
	return true;
}

/** A published sum with one part hidden: the hidden one is the difference. */
function checkSubtraction(solver: Solver, input: Example["input"], expected: Example["expected"], seen: Comparison) {
	const published = input.published as number[];
	const total = Number(input.total);
	const hidden = total - published.reduce((a, b) => a + b, 0);
	const line = [...published, hidden, total];
	const cells = [line, line];
	const key = twoWayKey(cells, [0, published.length]);
	compareInterval(intervals(solver, twoWay(cells), [key]).get(key), expected.suppressed as number[], seen);
	return true;
}

/** Letters stand for hidden cells: any table that has the margins will do, since bounds depend on the margins alone. */
function checkLetters(solver: Solver, input: Example["input"], expected: Example["expected"], seen: Comparison) {
	const rows = input.rows as (string | number)[][];
	const grid = filled(rows);
	const names = rows.flatMap((row, r) =>
		row.flatMap((cell, c) => (typeof cell === "string" ? [[cell, r, c] as const] : [])),
	);
	const keys = names.map(([, r, c]) => twoWayKey(grid, [r, c]));
	const found = intervals(solver, twoWay(grid), keys);
	names.forEach(([name], i) => compareInterval(found.get(keys[i]!), expected[name] as number[], seen));
	return true;
}

/** Fills letters from the top left, each with as much as its row and column still leave. */
function filled(rows: readonly (readonly (string | number)[])[]): Grid {
	const grid = rows.map((row) => row.map((cell) => (typeof cell === "number" ? cell : 0)));
	const lastRow = grid.length - 1;
	rows.forEach((row, r) =>
		row.forEach((cell, c) => {
			if (typeof cell === "number") return;
			const rowLeft = grid[r]!.at(-1)! - grid[r]!.slice(0, -1).reduce((a, b) => a + b, 0);
			const columnLeft = grid[lastRow]![c]! - grid.slice(0, -1).reduce((sum, line) => sum + line[c]!, 0);
			grid[r]![c] = Math.min(rowLeft, columnLeft);
		}),
	);
	return grid;
}

function checkTwoPatterns(solver: Solver, input: Example["input"], expected: Example["expected"], seen: Comparison) {
	const cells = input.cells as Grid;
	const compare = (pattern: Grid, told: Record<string, number[] | number>) => {
		const found = intervals(
			solver,
			twoWay(cells),
			pattern.map((place) => twoWayKey(cells, place)),
		);
		for (const [place, interval] of Object.entries(told)) {
			const ours = found.get(twoWayKey(cells, place.split(",").map(Number)));
			compareInterval(ours, typeof interval === "number" ? [interval, interval] : interval, seen);
		}
	};
	compare(input.suppressed_bad as Grid, expected.bad_exact as Record<string, number>);
	compare(input.suppressed_bad as Grid, expected.bad_intervals as Record<string, number[]>);
	compare(input.suppressed_good as Grid, expected.good_intervals as Record<string, number[]>);
	return true;
}

/** The printed pattern's intervals, and for each level our own shields: valid, and never below the proven least loss. */
function checkShields(solver: Solver, input: Example["input"], expected: Example["expected"], seen: Comparison) {
	const cells = input.cells as Grid;
	const table = twoWay(cells);
	const pattern = expected.pattern as Grid;
	const found = intervals(
		solver,
		table,
		pattern.map((place) => twoWayKey(cells, place)),
	);
	for (const [place, interval] of Object.entries(expected.intervals as Record<string, number[]>)) {
		compareInterval(found.get(twoWayKey(cells, place.split(",").map(Number))), interval, seen);
	}
	const primary = table.cells.findIndex(({ key }) => key === twoWayKey(cells, input.primary as number[]));
	for (const [level, least] of Object.entries(expected.min_value_by_protection as Record<string, number>)) {
		const own = [{ index: primary, reasons: ["dominated" as const], levels: { [VALUE]: Number(level) } }];
		const options = { ownersAttack: false, grandTotal: "never" } as const;
		const task = { table, options, loss: lossByCell(table, "value"), knowers: new Knowers(table, []) };
		const shields = chooseShields(solver, task, own);
		seen.holds(shields !== null);
		const withheld = new Set([primary, ...(shields ?? [])]);
		const value = (index: number) => table.cells[index]!.quantities[VALUE]!.total;
		seen.holds([...withheld].reduce((sum, index) => sum + value(index), 0) >= least);
		const [from, to] = feasibleIntervals(solver, table, { key: VALUE }, withheld).get(table.cells[primary]!.key)!;
		seen.holds(from <= value(primary) - Number(level) + 1e-6 && to >= value(primary) + Number(level) - 1e-6);
	}
	return true;
}

function intervals(solver: Solver, table: ProtectionTable, keys: readonly string[]) {
	const wanted = new Set(keys);
	const withheld = table.cells.flatMap(({ key }, index) => (wanted.has(key) ? [index] : []));
	return feasibleIntervals(solver, table, { key: VALUE }, new Set(withheld));
}

function compareInterval(found: readonly [number, number] | undefined, expected: readonly number[], seen: Comparison) {
	seen.number(found?.[0], expected[0]!);
	seen.number(found?.[1], expected[1]!);
}
