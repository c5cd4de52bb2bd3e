// Sources: see data/disclosure/SOURCES.md.
import { readFile } from "node:fs/promises";
import { beforeAll, describe, expect, test } from "vitest";
import { everybody } from "#app/protect/attackers.ts";
import { feasibleIntervals } from "#app/protect/audit.ts";
import { blocksOfTable } from "#app/protect/blocks-of-table.ts";
import { solveExactly } from "#app/protect/exact.ts";
import { Knowers } from "#app/protect/knowers.ts";
import { ownCells } from "#app/protect/levels.ts";
import { lossByCell } from "#app/protect/loss.ts";
import { protect } from "#app/protect/protect.ts";
import { loadSolver, type Solver } from "#app/protect/solver.ts";
import { readLarge, readStored, rulesOf, tableOf, VALUE } from "./disclosure-data.ts";
import { checkers } from "./verify/disclosure.ts";

const folder = new URL("./data/disclosure/", import.meta.url).pathname;
const tables = ["t01-twoway-4x4", "t02-twoway-5x6", "t03-twoway-8x6"].concat([
	"t04-hier-3-4x3",
	"t05-hier-4-5-4x5",
	"t06-hier2-4-3-4x2-3",
]);
let solver: Solver;
beforeAll(async () => {
	solver = await loadSolver();
});

const told = (total: number, parts: readonly number[]) => `${total}=${parts.toSorted((a, b) => a - b).join("+")}`;

describe.each(tables)("%s", (name) => {
	test("equations follow from the trees alone", async () => {
		const stored = await readStored(`${folder}${name}.json`);
		const { table, position } = tableOf(stored);
		const ours = table.equations.map(({ total, parts }) => told(total, parts));
		const theirs = stored.equations.map(({ total, parts }) => told(position(total), parts.map(position)));
		expect(ours.toSorted()).toEqual(theirs.toSorted());
	});

	test("own reasons and levels are those of the reference", async () => {
		const stored = await readStored(`${folder}${name}.json`);
		const { table, position } = tableOf(stored);
		const own = ownCells(table, rulesOf(stored.rule));
		expect(new Set(own.map(({ index }) => index))).toEqual(new Set(stored.expected.primary.map(position)));
		for (const cell of stored.cells.filter(({ i }) => stored.expected.primary.includes(i))) {
			const ours = own.find(({ index }) => index === position(cell.i))!;
			expect(ours.levels[VALUE]).toBeCloseTo(cell.protection, 6);
		}
	});

	test("the audit's intervals are those of the reference", async () => {
		const stored = await readStored(`${folder}${name}.json`);
		const { table, position } = tableOf(stored);
		const { primary, audit_primary_only: bare, min_value: value, min_count: count } = stored.expected;
		const compare = (withheld: number[], expected: Record<string, [number | null, number | null]>) => {
			const found = feasibleIntervals(solver, table, { key: VALUE }, new Set(withheld.map(position)));
			for (const [cell, [lower, upper]] of Object.entries(expected)) {
				const [from, to] = found.get(table.cells[position(Number(cell))]!.key)!;
				expect(from).toBeCloseTo(lower ?? -Infinity, 6);
				expect(to).toBeCloseTo(upper ?? Infinity, 6);
			}
		};
		compare(primary, bare.intervals);
		compare(value.pattern, value.primary_intervals);
		compare(count.pattern, count.primary_intervals);
	});

	test.each(["value", "count"] as const)(
		"our shields lose the least %s, proven, and pass the audit",
		async (objective) => {
			const stored = await readStored(`${folder}${name}.json`);
			const { table } = tableOf(stored);
			const { pattern, audit, loss } = await protect(table, rulesOf(stored.rule), {
				ownersAttack: false,
				grandTotal: "never",
				objective,
			});
			expect(audit.passed).toBe(true);
			const withheld = table.cells.filter(({ key }) => pattern.get(key)!.status === "withheld");
			const value = withheld.reduce((sum, cell) => sum + cell.quantities[VALUE]!.total, 0);
			const lost = objective === "value" ? value : withheld.length;
			expect(lost).toBe(stored.expected[`min_${objective}`].optimal_total);
			expect(loss!.bound).toBeCloseTo(loss!.lost, 9);
		},
	);

	test("told again with the same answers, it shows what it showed", async () => {
		const stored = await readStored(`${folder}${name}.json`);
		const { table } = tableOf(stored);
		const first = await protect(table, rulesOf(stored.rule));
		const keys = (status: string) => [...first.pattern].flatMap(([key, cell]) => (cell.status === status ? [key] : []));
		const guard = {
			keptBack: new Map(keys("withheld").map((key) => [key, { [VALUE]: 0 }] as const)),
			told: new Set(keys("shown")),
		};
		const { pattern, audit } = await protect(table, rulesOf(stored.rule), { guard });
		const statuses = (of: typeof pattern) => [...of].map(([key, { status }]) => `${key} ${status}`);
		expect(audit).toMatchObject({ passed: true, shields: 0 });
		expect(statuses(pattern)).toEqual(statuses(first.pattern));
	});

	test("shields hold against owners who know a cell alone", async () => {
		const stored = await readStored(`${folder}${name}.json`);
		const { audit } = await protect(tableOf(stored).table, rulesOf(stored.rule));
		expect(audit).toMatchObject({ passed: true, failures: [], withheldForOwnSake: stored.expected.primary.length });
	});
});

test("an audit fails where only the own cells are withheld and one can be solved", async () => {
	const { auditPattern } = await import("#app/protect/audit.ts");
	const stored = await readStored(`${folder}t01-twoway-4x4.json`);
	const { table, position } = tableOf(stored);
	const own = ownCells(table, rulesOf(stored.rule));
	const audit = auditPattern(solver, table, own, new Set(), { ownersAttack: false });
	expect(audit.passed).toBe(false);
	const solved = audit.failures.filter(({ kind }) => kind === "solved").map(({ cellKey }) => cellKey);
	const exact = Object.entries(stored.expected.audit_primary_only.intervals).filter(([, [from, to]]) => from === to);
	expect(new Set(solved)).toEqual(new Set(exact.map(([cell]) => table.cells[position(Number(cell))]!.key)));
});

test("3,000 counties: the cells withheld for their own sake are those of the reference", async () => {
	const table = await readLarge(`${folder}large_county_category.csv`);
	const own = ownCells(table, { minimumOwners: 3, dominancePercent: 10 });
	expect(own).toHaveLength(4215);
	expect(own.reduce((sum, { index }) => sum + table.cells[index]!.quantities[VALUE]!.total, 0)).toBe(2_467_482);
});

test.each(["value", "count"] as const)(
	"3,000 counties: 25 districts lose the least %s, as stored",
	async (objective) => {
		const table = await readLarge(`${folder}large_county_category.csv`);
		const expected = JSON.parse(await readFile(`${folder}large_expected.json`, "utf8"));
		const own = ownCells(table, rulesOf(expected.rule));
		const loss = lossByCell(table, objective);
		const districts = blocksOfTable(table, 100);
		expect(districts).toHaveLength(250);
		for (const { root, inside } of districts.slice(100, 125)) {
			const members = new Set(inside);
			const ownHere = own.filter(({ index }) => members.has(index));
			const certain = new Set(ownHere.map(({ index }) => index));
			const attackers = [everybody(table)];
			const knowers = new Knowers(table, []);
			const problem = { table, own: ownHere, attackers, knowers, scope: inside, certain };
			const { shields, ...found } = solveExactly(solver, { ...problem, outside: "still" }, loss);
			const withheld = [...certain, ...shields!];
			const value = withheld.reduce((sum, index) => sum + table.cells[index]!.quantities[VALUE]!.total, 0);
			const lost = objective === "value" ? value : withheld.length;
			expect([root, lost]).toEqual([root, expected[`min_${objective}`].per_district_optimum_total[root]]);
			expect(found.bound).toBe(found.loss);
		}
	},
	60_000,
);

test.each([...tables.map((name) => `${name}.json`), "published_examples.json", "large_county_category.csv"])(
	"verify recomputes %s",
	async (file) => {
		const checker = checkers.find((candidate) => candidate.file.test(file))!;
		const result = await checker.check(`${folder}${file}`, folder);
		expect(result).toMatchObject({ passed: true });
	},
);
