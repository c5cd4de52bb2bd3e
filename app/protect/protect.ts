import { auditPattern, type AuditResult } from "./audit.ts";
import { type BlockChoice, chooseBlock, type ChoiceOptions, joinChoices, type Plan, planChoice } from "./choice.ts";
import { ownCells } from "./levels.ts";
import { checkRules, type CellStatus, type OwnReason, type ProtectionRules } from "./rules.ts";
import type { Objective } from "./loss.ts";
import { loadSolver, type Solver } from "./solver.ts";
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
	/** null where no choice protects every cell */
	loss: ProvenLoss | null;
}

/** How near the pattern is to the least loss, own cells counted in; in cells, or in mean cells' worth of figures. */
export interface ProvenLoss {
	objective: Objective;
	lost: number;
	/** No pattern that protects every own cell loses less. */
	bound: number;
}

/** How far a computation is: blocks done of all, what they lose (own cells apart) and the bound on it. */
export interface ProtectProgress {
	phase: "choosing" | "joining" | "auditing";
	done: number;
	total: number;
	lost: number;
	bound: number;
}

const STRICT: ChoiceOptions = { ownersAttack: true, grandTotal: "last_resort", objective: "value" };

/** What a release uses, with what differs for comparing with published patterns. */
export type ProtectOptions = Partial<ChoiceOptions>;

/**
 * Decides for every cell of one survey whether it is shown, and audits the decision.
 * The same table and rules always give the same pattern. Blocks its thread while it solves: servers call
 * `protectInThread`, which does the same in threads of its own.
 * A caller must not publish when `audit.passed` is false; the pattern then withholds every cell that has growers, which
 * is still not proven safe.
 * @throws {RangeError} for rules out of bounds.
 */
export async function protect(
	table: ProtectionTable,
	rules: ProtectionRules,
	options: ProtectOptions = {},
): Promise<Protection> {
	const solver = await loadSolver();
	const plan = planProtection(table, rules, options);
	const choices = plan.blocks.map((block) => chooseBlock(solver, plan, block));
	return concludeProtection(solver, plan, choices);
}

/** The first step: own cells, and the table taken apart into blocks, each to be chosen with `chooseBlock`. */
export function planProtection(table: ProtectionTable, rules: ProtectionRules, options: ProtectOptions): Plan {
	return planChoice(table, ownCells(table, checkRules(rules)), { ...STRICT, ...options });
}

/** The last step: one pattern from the choices of all blocks, audited. */
export function concludeProtection(
	solver: Solver,
	plan: Plan,
	choices: readonly (BlockChoice | null)[],
	watch: (phase: "joining" | "auditing") => void = () => {},
): Protection {
	const { table, own, options } = plan;
	watch("joining");
	const choice = joinChoices(solver, plan, choices);
	const reasons = new Map(own.map((cell) => [cell.index, cell.reasons]));
	const everything = () =>
		table.cells.flatMap((cell, index) => (cell.owners > 0 && !reasons.has(index) ? [index] : []));
	const shields = choice?.shields ?? new Set(everything());
	const pattern = new Map(
		table.cells.map((cell, index): [string, CellDecision] => {
			if (cell.owners === 0) return [cell.key, { status: "no_growers", reasons: [] }];
			const why = reasons.get(index) ?? (shields.has(index) ? (["shield"] as const) : []);
			return [cell.key, { status: why.length > 0 ? "withheld" : "shown", reasons: why }];
		}),
	);
	watch("auditing");
	const audit = auditPattern(solver, table, own, shields, options);
	const loss = choice && { objective: options.objective, lost: choice.lost, bound: choice.bound };
	return { pattern, audit, loss };
}
