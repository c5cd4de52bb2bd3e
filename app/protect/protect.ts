import type { AuditResult } from "./audit.ts";
import type { CellStatus, OwnReason, ProtectionRules } from "./rules.ts";
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

/**
 * Decides for every cell of one survey whether it is shown, and audits the decision.
 * The same table and rules always give the same pattern. Blocks its thread while it solves: call it in the job worker.
 * A caller must not publish when `audit.passed` is false.
 * @throws {RangeError} for rules out of bounds, or a table whose cells do not add up.
 */
export declare function protect(table: ProtectionTable, rules: ProtectionRules): Promise<Protection>;
