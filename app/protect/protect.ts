import { auditPattern, type AuditResult } from "./audit.ts";
import { type BlockChoice, chooseBlock, type ChoiceOptions, joinChoices, type Plan, planChoice } from "./choice.ts";
import { auditRevision, type RevisionInput, withRevision } from "./audit-revision.ts";
import { BesideOthers, withOthers } from "./audit-others.ts";
import type { Holding } from "./holdings.ts";
import { harden } from "./harden.ts";
import { cutLevels } from "./cut-levels.ts";
import { ownCells } from "./levels.ts";
import type { RevisionGuard } from "./revision.ts";
import { checkRules, type CellStatus, type OwnReason, type ProtectionRules } from "./rules.ts";
import { type Objective, sumOver } from "./loss.ts";
import type { CellsByQuantity, SharedCells, SharedReleases } from "./shared-cells.ts";
import { chooseShields } from "./shields.ts";
import { loadSolver, type Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";
import { type Told, toldCells } from "./told.ts";

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

type Pattern = ReadonlyMap<string, CellDecision>;

export interface Protection {
	/** By cell key, every cell of the table. */
	pattern: Pattern;
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

/** What a release uses, with what differs for comparing with published patterns. Plain data, so that threads can have it. */
export interface ProtectOptions extends Partial<Omit<ChoiceOptions, "told">> {
	/** Where earlier releases of the survey are public: what they keep back and what they tell. */
	guard?: Pick<RevisionGuard, "keptBack" | "told">;
	/** These releases, and the answers behind the draft: what it would show is then audited beside them. */
	revision?: Pick<RevisionInput, "areas" | "cropKeys" | "earlier"> & { holdings: readonly Holding[] };
	/** What releases of other surveys of the season tell and withhold. */
	shared?: SharedCells;
}

/** What is to be decided, with the rules that its audit goes by. */
export type ProtectionPlan = Plan & {
	rules: ProtectionRules;
	revision: ProtectOptions["revision"];
	/** Own cells that other surveys tell, whole or in part. */
	knownElsewhere: number;
	/** The releases that tell, where a joint audit is to be made. */
	releases?: SharedReleases;
};

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
	const plan = planProtection(solver, table, rules, options);
	const choices = plan.blocks.map((block) => chooseBlock(solver, plan, block));
	return concludeProtection(solver, plan, choices);
}

/** The first step: own cells, and the table taken apart into blocks, each to be chosen with `chooseBlock`. */
export function planProtection(
	solver: Solver,
	table: ProtectionTable,
	rules: ProtectionRules,
	options: ProtectOptions,
): ProtectionPlan {
	const { guard, shared, revision, ...shielding } = options;
	const choosing = { ...STRICT, ...shielding };
	const asked = ownCells(table, checkRules(rules), guard?.keptBack, shared?.keptBack);
	const before = whatIsTold(table, rules, guard?.told);
	if (!shared)
		return { ...planChoice(table, asked, { ...choosing, told: before }, rules), rules, revision, knownElsewhere: 0 };
	const told = whatIsTold(table, rules, guard?.told, shared.told);
	const { ownersAttack } = choosing;
	const { own, knownElsewhere } = cutLevels(solver, { table, rules, own: asked, told, before, ownersAttack });
	const { releases } = shared;
	return { ...planChoice(table, own, { ...choosing, told }, rules), rules, revision, knownElsewhere, releases };
}

/** The last step: one pattern from the choices of all blocks, audited. */
export function concludeProtection(
	solver: Solver,
	plan: ProtectionPlan,
	choices: readonly (BlockChoice | null)[],
	watch: (phase: "joining" | "auditing") => void = () => {},
): Protection {
	const { table, own, options, rules } = plan;
	watch("joining");
	const choice = joinChoices(solver, plan, choices);
	const reasons = new Map(own.map((cell) => [cell.index, cell.reasons]));
	watch("auditing");
	const others = othersOf(solver, plan);
	// Where the chooser, which asks for a little more than the audit, finds nothing, own cells alone may do: so it is where a
	// revision tells the same again. What does not do is hardened, up to withholding everything.
	const { shields, audit } = harden(choice?.shields ?? new Set(), {
		table,
		rules,
		own,
		useless: toldCells(options.told),
		knownOutside: toldCells(options.told).size > 0 || options.told?.publicFactor != null || others !== null,
		audit: (chosen) => {
			const alone = auditPattern(solver, table, own, chosen, { ...options, rules });
			return others ? withOthers(alone, others.audit(new Set([...reasons.keys(), ...chosen]))) : alone;
		},
		besideOthers: (given) => others?.mend(given) ?? new Set(),
		more: (wishes, given) => chooseShields(solver, plan, wishes, given),
	});
	const pattern = new Map(
		table.cells.map((cell, index): [string, CellDecision] => {
			if (cell.owners === 0) return [cell.key, { status: "no_growers", reasons: [] }];
			const why = reasons.get(index) ?? (shields.has(index) ? (["shield"] as const) : []);
			return [cell.key, { status: why.length > 0 ? "withheld" : "shown", reasons: why }];
		}),
	);
	const lost = sumOver([...reasons.keys(), ...shields], plan.loss);
	// No pattern loses less than that of the own cells alone.
	const bound = choice?.bound ?? (shields.size === 0 ? lost : null);
	const loss = bound === null ? null : { objective: options.objective, lost, bound };
	const { knownElsewhere } = plan;
	return { pattern, audit: { ...beside(solver, plan, audit, pattern), knownElsewhere }, loss };
}

function othersOf(solver: Solver, { table, rules, own, options, loss, releases }: ProtectionPlan): BesideOthers | null {
	if (!releases || releases.others.length === 0) return null;
	return new BesideOthers(
		solver,
		{ table, rules, own, told: options.told ?? {}, ownersAttack: options.ownersAttack, loss },
		releases,
	);
}

/** The audit, with what the draft tells beside earlier releases. */
function beside(solver: Solver, { table, rules, revision }: ProtectionPlan, audit: AuditResult, pattern: Pattern) {
	if (!revision || revision.earlier.length === 0) return audit;
	const quantities = table.quantities.filter(({ overlapsOver }) => !overlapsOver).map(({ key }) => key);
	const shown = new Set([...pattern].flatMap(([key, { status }]) => (status === "shown" ? [key] : [])));
	const draft = { shown, holdings: revision.holdings };
	return withRevision(audit, auditRevision(solver, { ...revision, quantities, rules, draft }));
}

/** What the guard and other releases name by key, by position. */
function whatIsTold(
	table: ProtectionTable,
	rules: ProtectionRules,
	earlier: ReadonlySet<string> = new Set(),
	elsewhere: CellsByQuantity = new Map(),
): Told {
	const cells = table.quantities.map(({ key }) => {
		const told = (cell: { key: string }) => earlier.has(cell.key) || elsewhere.get(key)?.has(cell.key);
		return [key, new Set(table.cells.flatMap((cell, index) => (told(cell) ? [index] : [])))] as const;
	});
	return { cells: new Map(cells), publicFactor: rules.publicFactor };
}
