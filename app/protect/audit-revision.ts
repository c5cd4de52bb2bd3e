import type { AuditFailure, AuditResult } from "./audit.ts";
import { type AuditEdition, cellOf, findBesideEditions, type GuardedDifference } from "./audit-editions.ts";
import { type AreaTree, cellsAround } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { ownCells } from "./levels.ts";
import { partsOf } from "./parts.ts";
import { type Change, changesByCell, differenceOf, type Edition } from "./revision.ts";
import type { ProtectionRules } from "./rules.ts";
import type { Solver } from "./solver.ts";

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
	const editions = [...input.earlier, { name: "draft", ...input.draft }].map((edition): Made => {
		const table = tableOfHoldings({ ...input, holdings: edition.holdings });
		return { ...edition, table, own: ownCells(table, input.rules), parts: partsOf(table) };
	});
	const changed = changesBetween(editions, input);
	const found = input.quantities.map((quantity, q) => ({
		quantity,
		...findBesideEditions(solver, {
			quantity,
			editions,
			sameAs: (e, key) => {
				const first = changed[e]!.findIndex((cells) => !cells.has(key));
				return first === -1 ? e : first;
			},
			differences: fewDifferences(q, editions, changed.at(-1)!, input),
			owners: true,
		}),
	}));
	const failures = found.flatMap(({ quantity, failed }) =>
		[...new Set(failed.map(cellOf))].map((cellKey): AuditFailure => ({ cellKey, quantity, kind: "by_revision" })),
	);
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

type Made = Edition & AuditEdition;
type Changes = ReturnType<typeof changesByCell>;

/** For each edition and each one before it, what differs. */
function changesBetween(editions: readonly Edition[], { areas, quantities }: RevisionInput): Changes[][] {
	const around = cellsAround(areas);
	return editions.map((one, e) =>
		editions.slice(0, e).map((before) => changesByCell(before.holdings, one.holdings, quantities, around)),
	);
}

/** Cells in which too few owners' answers differ between an earlier edition and the draft, and the room they ask for. */
function fewDifferences(
	q: number,
	editions: readonly Made[],
	changed: readonly Changes[],
	{ quantities, rules }: RevisionInput,
): GuardedDifference[] {
	const later = editions.length - 1;
	const living = new Set(editions[later]!.table.cells.flatMap(({ key, owners }) => (owners > 0 ? [key] : [])));
	return changed.flatMap((cells, earlier) =>
		[...cells].flatMap(([cellKey, owners]): GuardedDifference[] => {
			const changes = [...owners.values()];
			// Who withdrew from a cell that now has nobody is told apart by no figure of it.
			if (!living.has(cellKey) || differenceOf(changes, quantities, rules) !== "few") return [];
			const level = (rules.dominancePercent / 100) * largest(changes, q);
			return level > 0 ? [{ cellKey, earlier, later, level, owners: [...owners.keys()] }] : [];
		}),
	);
}

function largest(changes: readonly Change[], q: number): number {
	return changes.reduce((most, change) => Math.max(most, Math.abs(change[q]!)), 0);
}
