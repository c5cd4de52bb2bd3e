// Recomputes stored disclosure files: own reasons, levels, the audit's intervals, least losses, worked examples.
import { readFile } from "node:fs/promises";
import path from "node:path";
import { auditPattern, feasibleIntervals } from "#app/protect/audit.ts";
import { ownCells } from "#app/protect/levels.ts";
import { protect, type ProvenLoss, type TableCell } from "#app/protect/protect.ts";
import { protectInThread } from "#app/protect/protect-thread.server.ts";
import { loadSolver } from "#app/protect/solver.ts";
import { readLarge, readStored, rulesOf, tableOf, VALUE } from "../disclosure-data.ts";
import { checkExample, type Example } from "../disclosure-examples.ts";
import { Comparison } from "./comparison.ts";
import type { Checker } from "./checker.ts";

export const checkers: Checker[] = [
	{ file: /^t\d+-.*\.json$/, check: checkTable },
	{ file: /^large_county_category\.csv$/, check: checkLarge },
	{ file: /^large_expected\.json$/, check: checkLargeChoice },
	{ file: /^published_examples\.json$/, check: checkExamples },
];

/** Own cells, levels, intervals of the stored patterns; stored patterns must pass our audit, ours must pass it too. */
async function checkTable(file: string) {
	const solver = await loadSolver();
	const stored = await readStored(file);
	const { table, position } = tableOf(stored);
	const { primary, audit_primary_only: bare, min_value: value, min_count: count } = stored.expected;
	const rules = rulesOf(stored.rule);
	const own = ownCells(table, rules);
	const seen = new Comparison(1e-6);
	seen.sameSet(
		own.map(({ index }) => index),
		primary.map(position),
	);
	for (const { index, levels } of own) {
		const cell = stored.cells.find(({ i }) => position(i) === index);
		seen.number(levels[VALUE], cell?.protection ?? 0);
	}
	for (const [withheld, expected] of [
		[primary, bare.intervals],
		[value.pattern, value.primary_intervals],
		[count.pattern, count.primary_intervals],
	] as const) {
		const found = feasibleIntervals(solver, table, { key: VALUE }, new Set(withheld.map(position)));
		for (const [cell, [lower, upper]] of Object.entries(expected)) {
			const interval = found.get(table.cells[position(Number(cell))]!.key);
			seen.number(interval?.[0], lower ?? -Infinity);
			seen.number(interval?.[1], upper ?? Infinity);
		}
	}
	const ownPositions = new Set(own.map(({ index }) => index));
	for (const { pattern } of [value, count]) {
		const shields = new Set(pattern.map(position).filter((index) => !ownPositions.has(index)));
		seen.holds(auditPattern(solver, table, own, shields, { ownersAttack: false }).passed);
	}
	const told: string[] = [];
	for (const objective of ["value", "count"] as const) {
		const ours = await protect(table, rules, { ...published, objective });
		const withheld = table.cells.filter(({ key }) => ours.pattern.get(key)!.status === "withheld");
		const lost = objective === "value" ? valueOf(withheld) : withheld.length;
		seen.number(lost, stored.expected[`min_${objective}`].optimal_total);
		seen.holds(ours.audit.passed && ours.loss !== null && isProven(ours.loss));
		told.push(`${objective} ${lost}, proven least`);
	}
	return seen.result(`own pattern withholds ${told.join("; ")}`);
}

/** The attacker of the stored files: nobody knows a cell, and the total of everything is always shown. */
const published = { ownersAttack: false, grandTotal: "never" } as const;

function valueOf(cells: readonly TableCell[]): number {
	return cells.reduce((sum, cell) => sum + cell.quantities[VALUE]!.total, 0);
}

const isProven = ({ lost, bound }: ProvenLoss) => bound >= lost * (1 - 1e-9);

interface LargeExpected {
	rule: { p_percent: number; min_contributors: number };
	cells_including_margins: number;
	equations: number;
	primary_count: number;
	primary_value: number;
	grand_total: number;
	min_value: { lower_bound_total: number };
	min_count: { lower_bound_total: number };
}

async function checkLarge(file: string, folder: string) {
	const expected: LargeExpected = JSON.parse(await readFile(path.join(folder, "large_expected.json"), "utf8"));
	const table = await readLarge(file);
	const own = ownCells(table, rulesOf(expected.rule));
	const value = (index: number) => table.cells[index]!.quantities[VALUE]!.total;
	const seen = new Comparison(1e-9);
	seen.number(table.cells.length, expected.cells_including_margins);
	seen.number(table.equations.length, expected.equations);
	seen.number(own.length, expected.primary_count);
	seen.number(
		own.reduce((sum, { index }) => sum + value(index), 0),
		expected.primary_value,
	);
	const widest = table.cells.findIndex(({ coordinates }) => coordinates.join() === "US,all");
	seen.number(value(widest), expected.grand_total);
	return seen.result("cells withheld for their own sake");
}

/** Within 2 % of the stored lower bound, never below it, and audited. */
async function checkLargeChoice(file: string, folder: string) {
	const expected: LargeExpected = JSON.parse(await readFile(file, "utf8"));
	const table = await readLarge(path.join(folder, "large_county_category.csv"));
	const seen = new Comparison(1e-9);
	const told: string[] = [];
	for (const objective of ["value", "count"] as const) {
		const started = performance.now();
		const { pattern, audit, loss } = await protectInThread(table, rulesOf(expected.rule), {
			...published,
			objective,
		});
		const seconds = (performance.now() - started) / 1000;
		const withheld = table.cells.filter(({ key }) => pattern.get(key)!.status === "withheld");
		const lost = objective === "value" ? valueOf(withheld) : withheld.length;
		const least = expected[`min_${objective}`].lower_bound_total;
		seen.holds(audit.passed);
		seen.holds(lost >= least && lost <= 1.02 * least);
		const proof = loss && isProven(loss) ? "proven least" : "not proven least";
		told.push(`${objective} ${lost}, ${(100 * (lost / least - 1)).toFixed(3)} % over the stored bound, ${proof}`);
		told.push(`${seconds.toFixed(0)} s`);
	}
	return seen.result(told.join("; "));
}

async function checkExamples(file: string) {
	const examples: Example[] = JSON.parse(await readFile(file, "utf8"));
	const solver = await loadSolver();
	const seen = new Comparison(1e-9);
	const left: string[] = [];
	for (const example of examples) if (!(await checkExample(solver, example, seen))) left.push(example.id);
	return seen.values === 0
		? ("not_covered" as const)
		: { ...seen.result(`not covered: ${left.join(", ") || "none"}`), notCovered: left.length };
}
