import { type Attacker, everybody, owners } from "./attackers.ts";
import { blocksOfTable, type TableBlock } from "./blocks-of-table.ts";
import { defaultLimits, type ExactLimits, solveExactly, type Watch } from "./exact.ts";
import { Knowers } from "./knowers.ts";
import type { OwnCell } from "./levels.ts";
import { type LineGuard, lineGuard } from "./lines.ts";
import { lossByCell, type Objective, sumOver } from "./loss.ts";
import { chooseShields, type ShieldOptions } from "./shields.ts";
import type { ProtectionRules } from "./rules.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";

export interface ChoiceOptions extends ShieldOptions {
	objective: Objective;
	limits?: ExactLimits;
	/** Cells times quantities up to which a block is solved in one. */
	blockCells?: number;
}

/** All that a thread must know to choose the shields of any block. */
export interface Plan {
	table: ProtectionTable;
	own: readonly OwnCell[];
	options: ChoiceOptions;
	/** everybody, and every owner where owners attack */
	attackers: readonly Attacker[];
	knowers: Knowers;
	sums?: LineGuard;
	loss: readonly number[];
	blocks: TableBlock[];
}

export interface BlockChoice {
	shields: number[];
	/** of these shields */
	loss: number;
	/** Whether these shields protect the block's own cells whatever becomes of the cells outside. */
	settled: boolean;
	/** No pattern of the whole table loses less among this block's cells, shields alone counted. */
	bound: number;
	/** found to be the least, not only bounded */
	proven: boolean;
	linearPrograms: number;
}

export interface Choice {
	shields: Set<number>;
	/** Lost information with own cells: see `lossByCell`. */
	lost: number;
	/** No pattern that protects every cell loses less. */
	bound: number;
	linearPrograms: number;
}

/**
 * What is to be chosen, taken apart. Blocks do not depend on each other: they can be chosen in any order and thread.
 * @param rules what a line's sum must meet; asked where owners attack.
 */
export function planChoice(
	table: ProtectionTable,
	own: readonly OwnCell[],
	options: ChoiceOptions,
	rules: ProtectionRules,
): Plan {
	const { told, ownersAttack, objective, blockCells } = options;
	const knowing = ownersAttack ? owners(table, told) : [];
	return {
		table,
		own,
		options,
		attackers: [everybody(table, told), ...knowing],
		knowers: new Knowers(table, knowing),
		...(ownersAttack && { sums: lineGuard(table, rules, new Set(own.map(({ index }) => index))) }),
		loss: lossByCell(table, objective),
		blocks: blocksOfTable(table, blockCells),
	};
}

/**
 * Shields of least loss within one block. In one that is not the whole table,
 * cells of its root's margin may first be withheld at their loss, and the rest of the table may be anything: no pattern of
 * the whole loses less there. When that choice leaves the margin shown, it needs nothing from outside and is the answer;
 * else the block is chosen once more with its margin shown.
 * @returns null when nothing protects the block's cells, not even with help from outside.
 */
export function chooseBlock(
	solver: Solver,
	plan: Plan,
	block: TableBlock,
	watch: Watch = () => {},
): BlockChoice | null {
	if (block.margins.length === 0) return chooseWhole(solver, plan, block, watch);
	const all = [...block.inside, ...block.margins].toSorted((a, b) => a - b);
	const wide = solve(solver, plan, all, "free", watch);
	const { bound, proven } = wide;
	if (bound === Infinity) return null;
	const margin = new Set(block.margins);
	const ownMargin = plan.own.some(({ index }) => margin.has(index));
	if (!ownMargin && wide.shields && !wide.shields.some((index) => margin.has(index))) {
		return {
			shields: wide.shields,
			loss: wide.loss,
			settled: true,
			bound,
			proven,
			linearPrograms: wide.linearPrograms,
		};
	}
	const close = solve(solver, plan, block.inside, "still", watch);
	const linearPrograms = wide.linearPrograms + close.linearPrograms;
	const settled = close.shields !== null;
	const shields = close.shields ?? wide.shields ?? [];
	return { shields, loss: sumOver(shields, plan.loss), settled, bound, proven: false, linearPrograms };
}

/** The total of everything stays shown where anything else helps. Where the limits are met first, near-least shields do. */
function chooseWhole(solver: Solver, plan: Plan, { inside }: TableBlock, watch: Watch): BlockChoice | null {
	const { table, own, options } = plan;
	const grand = table.cells.findIndex((c) => c.coordinates.every((code, d) => code === table.hierarchies[d]!.root));
	const locked = !own.some(({ index }) => index === grand);
	const scope = locked ? inside.filter((index) => index !== grand) : inside;
	let found = solve(solver, plan, scope, "still", watch);
	if (locked && found.bound === Infinity && options.grandTotal === "last_resort")
		found = solve(solver, plan, inside, "still", watch);
	const { shields, linearPrograms } = found;
	if (shields) return { ...found, shields, settled: true };
	const near = chooseShields(solver, plan, own);
	if (!near) return null;
	const bound = found.bound === Infinity ? 0 : found.bound;
	const loss = sumOver(near, plan.loss);
	return { shields: [...near], loss, settled: true, bound: Math.min(bound, loss), proven: false, linearPrograms };
}

function solve(solver: Solver, plan: Plan, scope: readonly number[], outside: "still" | "free", watch: Watch) {
	const { table, attackers, knowers, sums, loss, options } = plan;
	const members = new Set(scope);
	const own = plan.own.filter(({ index }) => members.has(index));
	const certain = new Set(own.map(({ index }) => index));
	const problem = { table, own, attackers, knowers, sums, told: options.told, scope, certain, outside };
	const result = solveExactly(solver, problem, loss, options.limits ?? defaultLimits, watch);
	return { ...result, proven: result.bound === result.loss };
}

/**
 * One pattern from the choices of all blocks. Own cells that no block has settled (above the blocks, at a margin, or where
 * only the outside helps) get near-least shields beside those chosen.
 * @returns null when even withholding every cell that may be withheld does not help.
 */
export function joinChoices(solver: Solver, plan: Plan, choices: readonly (BlockChoice | null)[]): Choice | null {
	const { own, loss, blocks } = plan;
	const given = new Set(own.map(({ index }) => index));
	const settled = new Set<number>();
	let bound = sumOver(given, loss);
	let linearPrograms = 0;
	for (const [b, choice] of choices.entries()) {
		if (!choice) return null;
		for (const index of choice.shields) given.add(index);
		if (choice.settled) for (const index of blocks[b]!.inside) settled.add(index);
		bound += choice.bound;
		linearPrograms += choice.linearPrograms;
	}
	const left = own.filter(({ index }) => !settled.has(index));
	const more = left.length > 0 ? chooseShields(solver, plan, left, given) : [];
	if (!more) return null;
	const ownSet = new Set(own.map(({ index }) => index));
	const shields = new Set([...given, ...more].filter((index) => !ownSet.has(index)).toSorted((a, b) => a - b));
	return { shields, lost: sumOver([...ownSet, ...shields], loss), bound, linearPrograms };
}
