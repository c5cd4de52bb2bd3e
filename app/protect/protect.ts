import { auditPattern, type AuditResult } from "./audit.ts";
import { ownCells } from "./levels.ts";
import { checkRules, type CellStatus, type OwnReason, type ProtectionRules } from "./rules.ts";
import { chooseShields, type ShieldOptions } from "./shields.ts";
import { loadSolver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";

export type { AuditFailure, AuditResult } from "./audit.ts";
export { defaultRules } from "./rules.ts";
export type { CellStatus, OwnReason, ProtectionRules } from "./rules.ts";
export { buildTable, cellKey } from "./table.ts";
export type { Hierarchy, OwnerShare, ProtectionTable, Quantity, TableCell } from "./table.ts";

export interface CellDecision {
	status: CellStatus;
	/** Own reasons, or `shield` alone; empty for a cell that is shown or has no growers. For the desk only. */
	reasons: readonly (OwnReason | "shield")[];
}

export interface Protection {
	/** By cell key, every cell of the table. */
	pattern: ReadonlyMap<string, CellDecision>;
	audit: AuditResult;
}

const STRICT: ShieldOptions = { ownersAttack: true, grandTotal: "last_resort" };

/**
 * Decides for every cell of one survey whether it is shown, and audits the decision.
 * The same table and rules always give the same pattern. Blocks its thread while it solves: call it in the job worker.
 * A caller must not publish when `audit.passed` is false; the pattern then withholds every cell that has growers, which
 * is still not proven safe.
 * @param options for comparing with published patterns only; a release uses the strict defaults.
 * @throws {RangeError} for rules out of bounds.
 */
export async function protect(
	table: ProtectionTable,
	rules: ProtectionRules,
	options: ShieldOptions = STRICT,
): Promise<Protection> {
	const solver = await loadSolver();
	const own = ownCells(table, checkRules(rules));
	const reasons = new Map(own.map((cell) => [cell.index, cell.reasons]));
	const everything = new Set(
		table.cells.flatMap((cell, index) => (cell.owners > 0 && !reasons.has(index) ? [index] : [])),
	);
	const shields = chooseShields(solver, table, own, options) ?? everything;
	const pattern = new Map(
		table.cells.map((cell, index): [string, CellDecision] => {
			if (cell.owners === 0) return [cell.key, { status: "no_growers", reasons: [] }];
			const why = reasons.get(index) ?? (shields.has(index) ? (["shield"] as const) : []);
			return [cell.key, { status: why.length > 0 ? "withheld" : "shown", reasons: why }];
		}),
	);
	return { pattern, audit: auditPattern(solver, table, own, shields, options) };
}
