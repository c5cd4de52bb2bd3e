import { type Attacker, everybody, soleOwners } from "./attackers.ts";
import { blocksOfTable, type TableBlock } from "./blocks-of-table.ts";
import { defaultLimits, type ExactLimits, solveExactly, type Watch } from "./exact.ts";
import type { OwnCell } from "./levels.ts";
import { lossByCell, type Objective, sumOver } from "./loss.ts";
import { chooseShields, type ShieldOptions } from "./shields.ts";
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
	attackers: readonly Attacker[];
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

/** What is to be chosen, taken apart. Blocks do not depend on each other: they can be chosen in any order and thread. */
export function planChoice(table: ProtectionTable, own: readonly OwnCell[], options: ChoiceOptions): Plan {
	const attackers = [everybody(table, options.told), ...(options.ownersAttack ? soleOwners(table, options.told) : [])];
	const loss = lossByCell(table, options.objective);
	return { table, own, options, attackers, loss, blocks: blocksOfTable(table, options.blockCells) };
}

/**
 * Shields of least loss within one block. A block that is the whole table starts from near-least shields. In another,
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
	const wide = solve(solver, plan, all, "free", null, watch);
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
	const close = solve(solver, plan, block.inside, "still", null, watch);
	const linearPrograms = wide.linearPrograms + close.linearPrograms;
	const settled = close.shields !== null;
	const shields = close.shields ?? wide.shields ?? [];
	return { shields, loss: sumOver(shields, plan.loss), settled, bound, proven: false, linearPrograms };
}

function chooseWhole(solver: Solver, plan: Plan, { inside }: TableBlock, watch: Watch): BlockChoice | null {
	const { table, own, options } = plan;
	const start = chooseShields(solver, table, own, options);
	if (!start) return null;
	const grand = table.cells.findIndex((c) => c.coordinates.every((code, d) => code === table.hierarchies[d]!.root));
	const locked = !start.has(grand) && !own.some(({ index }) => index === grand);
	const scope = locked ? inside.filter((index) => index !== grand) : inside;
	const { shields, bound, loss, linearPrograms } = solve(solver, plan, scope, "still", [...start], watch);
	return { shields: shields ?? [...start], loss, settled: true, bound, proven: bound === loss, linearPrograms };
}

function solve(
	solver: Solver,
	plan: Plan,
	scope: readonly number[],
	outside: "still" | "free",
	start: readonly number[] | null,
	watch: Watch,
) {
	const { table, attackers, loss, options } = plan;
	const members = new Set(scope);
	const own = plan.own.filter(({ index }) => members.has(index));
	const certain = new Set(own.map(({ index }) => index));
	const problem = { table, own, attackers, scope, certain, outside };
	const result = solveExactly(solver, problem, loss, start, options.limits ?? defaultLimits, watch);
	return { ...result, proven: result.bound === result.loss };
}

/**
 * One pattern from the choices of all blocks. Own cells that no block has settled (above the blocks, at a margin, or where
 * only the outside helps) get near-least shields beside those chosen.
 * @returns null when even withholding every cell that may be withheld does not help.
 */
export function joinChoices(solver: Solver, plan: Plan, choices: readonly (BlockChoice | null)[]): Choice | null {
	const { table, own, options, loss, blocks } = plan;
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
	const more = left.length > 0 ? chooseShields(solver, table, left, options, given) : [];
	if (!more) return null;
	const ownSet = new Set(own.map(({ index }) => index));
	const shields = new Set([...given, ...more].filter((index) => !ownSet.has(index)).toSorted((a, b) => a - b));
	return { shields, lost: sumOver([...ownSet, ...shields], loss), bound, linearPrograms };
}
