import type { AuditFailure, AuditResult } from "./audit.ts";
import { type KnownPart, type Target, tryOwners } from "./audit-owners.ts";
import { intervalsOf } from "./audit-search.ts";
import { blocksOf, linesOf, type Relation, relationsOf, type Unknown } from "./audit-system.ts";
import { roomOf, ROUNDING } from "./audit-widths.ts";
import { type AreaTree, cellsAround } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { ownCells, type OwnCell } from "./levels.ts";
import { partsOf } from "./parts.ts";
import { type Change, changesByCell, differenceOf, type Edition } from "./revision.ts";
import type { ProtectionRules } from "./rules.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";

/** What was tried by subtraction. */
export interface RevisionAudit {
	passed: boolean;
	tried: number;
	failures: AuditFailure[];
	linearPrograms: number;
}

export interface RevisionInput {
	areas: AreaTree;
	cropKeys: readonly string[];
	/** Base quantities that add up over areas and crops. */
	quantities: readonly string[];
	rules: ProtectionRules;
	earlier: readonly Edition[];
	/** What the draft would show, and the answers that it is made of. */
	draft: Omit<Edition, "name">;
}

/**
 * Audits a draft together with the releases that it would stand beside, for somebody who keeps them all. One program holds
 * the tables of every edition; a cell in which nobody's answers differ has one value in all of them, so that showing it in
 * one shows it in each. Fails where, by all of this together,
 * - a cell that an earlier release or the draft withholds for its own sake comes out closer than its level,
 * - a difference that rests on too few owners comes out closer than p% of the largest change.
 * A cell of the draft that an earlier release has told already has nothing left to protect.
 * Each owner is tried too, with the own answers of every edition.
 */
export function auditRevision(solver: Solver, input: RevisionInput): RevisionAudit {
	const editions = [...input.earlier, { name: "draft", ...input.draft }].map((edition) => {
		const table = tableOfHoldings({ ...input, holdings: edition.holdings });
		return { ...edition, table, own: ownCells(table, input.rules), parts: partsOf(table) };
	});
	const same = classesOf(editions, input);
	const found = input.quantities.map((_, q) => auditQuantity(solver, q, editions, same, input));
	const failures = found.flatMap((one) => one.failures);
	return {
		passed: failures.length === 0,
		tried: found.reduce((sum, one) => sum + one.tried, 0),
		failures,
		linearPrograms: found.reduce((sum, one) => sum + one.runs, 0),
	};
}

/** The audit of a draft with what was found by subtraction. */
export function withRevision(audit: AuditResult, revision: RevisionAudit): AuditResult {
	return {
		...audit,
		passed: audit.passed && revision.passed,
		failures: [...audit.failures, ...revision.failures],
		linearPrograms: audit.linearPrograms + revision.linearPrograms,
		attackers: [...audit.attackers, { kind: "revision", tried: revision.tried, failed: revision.failures.length }],
	};
}

type Made = Edition & { table: ProtectionTable; own: OwnCell[]; parts: ReturnType<typeof partsOf> };

/** For each edition and cell, the first edition with the very same answers in it. */
type Classes = (edition: number, cell: number) => number;

function classesOf(editions: readonly Made[], { areas, quantities }: RevisionInput): Classes {
	const around = cellsAround(areas);
	const changed = editions.map((one, e) =>
		editions.slice(0, e).map((before) => changesByCell(before.holdings, one.holdings, quantities, around)),
	);
	return (e, cell) => {
		const key = editions[e]!.table.cells[cell]!.key;
		const first = changed[e]!.findIndex((cells) => !cells.has(key));
		return first === -1 ? e : first;
	};
}

function auditQuantity(
	solver: Solver,
	q: number,
	editions: readonly Made[],
	same: Classes,
	input: RevisionInput,
): { failures: AuditFailure[]; tried: number; runs: number } {
	const quantity = editions[0]!.table.quantities[q]!;
	const last = editions.length - 1;
	const value = (e: number, cell: number) => editions[e]!.table.cells[cell]!.quantities[quantity.key]!.total;
	const { unknowns, unknownOf, sources } = unknownsOf(editions, same, value);
	const changers = new Map<number, KnownPart[]>();
	const relations: Relation[] = editions.flatMap(({ table }, e) =>
		relationsOf(table, linesOf(table), quantity, (cell) => unknownOf(e, cell)),
	);
	const targets: (Target & { cellKey: string })[] = [];
	const failures: AuditFailure[] = [];
	const fail = (cellKey: string) => failures.push({ cellKey, quantity: quantity.key, kind: "by_revision" });
	editions.forEach(({ table, own, shown }, e) => {
		for (const { index, levels } of own) {
			const { key: cellKey } = table.cells[index]!;
			const level = levels[quantity.key]!;
			const unknown = unknownOf(e, index);
			if (level === 0 || shown.has(cellKey)) continue;
			if (unknown !== undefined) targets.push({ cellKey, unknown, up: level, down: Math.min(level, value(e, index)) });
			// What the draft withholds and an earlier release told is told; what the draft tells of an earlier one is a fault.
			else if (e < last) fail(cellKey);
		}
	});
	for (const { cell, edition, level, owners } of fewDifferences(q, editions, input)) {
		const { key: cellKey } = editions[last]!.table.cells[cell]!;
		const [now, was] = [unknownOf(last, cell), unknownOf(edition, cell)];
		if (now === undefined && was === undefined) {
			fail(cellKey);
			continue;
		}
		const difference = value(last, cell) - value(edition, cell);
		const unknown = unknowns.push({ value: difference, lower: -Infinity, upper: Infinity }) - 1;
		const terms = [
			[unknown, -1] as const,
			...(now === undefined ? [] : [[now, 1] as const]),
			...(was === undefined ? [] : [[was, -1] as const]),
		];
		relations.push({ unknowns: terms.map(([u]) => u), factors: terms.map(([, f]) => f), lower: 0, upper: 0 });
		targets.push({ cellKey, unknown, up: level, down: level });
		// Who changed an answer knows that much of the difference; who alone did knows all of it.
		const alone = owners.length === 1;
		changers.set(
			unknown,
			owners.map((owner) => ({ owner, amount: alone ? difference : -Infinity, alone })),
		);
	}
	const blocks = blocksOf(unknowns, relations);
	const searched = blocks.map((block) => intervalsOf(solver, block));
	const intervals = new Map(searched.flatMap((one) => [...one.intervals]));
	for (const target of targets) {
		const room = roomOf(intervals.get(target.unknown)!, { ...target, ...unknowns[target.unknown]! });
		if (room < 1 - ROUNDING) fail(target.cellKey);
	}
	const known = (unknown: number) => changers.get(unknown) ?? partsHere(editions, q, sources[unknown]!);
	const keyOf = new Map(targets.map((target) => [target.unknown, target.cellKey]));
	const owners = blocks.map((block) => tryOwners(solver, block, targets, known));
	for (const unknown of new Set(owners.flatMap(({ failed }) => failed))) fail(keyOf.get(unknown)!);
	const all = [...searched, ...owners];
	return { failures, tried: targets.length, runs: all.reduce((sum, one) => sum + one.runs, 0) };
}

/** What each owner knows of a withheld cell of an edition, the largest part first. */
function partsHere(editions: readonly Made[], q: number, [edition, cell]: readonly [number, number]): KnownPart[] {
	const { table, parts } = editions[edition]!;
	const alone = table.cells[cell]!.owners === 1;
	return parts(cell)
		.map(({ owner, amounts }) => ({ owner, amount: amounts[q]!, alone }))
		.toSorted((a, b) => b.amount - a.amount);
}

/** One unknown for each cell and set of editions that have the same answers in it, unless one of these shows it. */
function unknownsOf(editions: readonly Made[], same: Classes, value: (edition: number, cell: number) => number) {
	const unknowns: Unknown[] = [];
	const sources: [edition: number, cell: number][] = [];
	const places = editions.map(() => new Map<number, number>());
	editions[0]!.table.cells.forEach(({ key }, cell) => {
		const classes = editions.map((_, e) => same(e, cell));
		const known = new Set(
			classes.filter((_, e) => editions[e]!.shown.has(key) || editions[e]!.table.cells[cell]!.owners === 0),
		);
		const made = new Map<number, number>();
		classes.forEach((first, e) => {
			if (known.has(first)) return;
			const place = made.get(first) ?? unknowns.push({ value: value(e, cell), lower: 0, upper: Infinity }) - 1;
			made.set(first, place);
			sources[place] = [e, cell];
			places[e]!.set(cell, place);
		});
	});
	return { unknowns, sources, unknownOf: (edition: number, cell: number) => places[edition]!.get(cell) };
}

/** Cells in which too few owners' answers differ between an earlier edition and the draft, and the room they ask for. */
function fewDifferences(q: number, editions: readonly Made[], { areas, quantities, rules }: RevisionInput) {
	const around = cellsAround(areas);
	const draft = editions.at(-1)!;
	const position = new Map(draft.table.cells.map((cell, index) => [cell.key, index]));
	return editions.slice(0, -1).flatMap((before, edition) => {
		const changed = changesByCell(before.holdings, draft.holdings, quantities, around);
		return [...changed].flatMap(([key, owners]) => {
			const cell = position.get(key)!;
			const changes = [...owners.values()];
			// Who withdrew from a cell that now has nobody is told apart by no figure of it.
			if (draft.table.cells[cell]!.owners === 0 || differenceOf(changes, quantities, rules) !== "few") return [];
			const level = (rules.dominancePercent / 100) * largest(changes, q);
			return level > 0 ? [{ cell, edition, level, owners: [...owners.keys()] }] : [];
		});
	});
}

function largest(changes: readonly Change[], q: number): number {
	return changes.reduce((most, change) => Math.max(most, Math.abs(change[q]!)), 0);
}
