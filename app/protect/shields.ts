import type { Attacker } from "./attackers.ts";
import { Augmenter } from "./augment.ts";
import { isPossibleTo, type Knowers, type Moved } from "./knowers.ts";
import type { OwnCell } from "./levels.ts";
import type { LineGuard, LineSum } from "./lines.ts";
import type { Objective } from "./loss.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";
import { isTold, type Told, toldCells } from "./told.ts";

export interface ShieldOptions {
	/** Whether owners use what they know, alone and together in a line. */
	ownersAttack: boolean;
	/** Whether the total of everything may be withheld when nothing else helps. */
	grandTotal: "last_resort" | "never";
	/** `value` where it is not given */
	objective?: Objective;
	/** What is known from outside: cells of these cannot shield. */
	told?: Told;
}

/** What shields are chosen for: a plan, or what there is of one. */
export interface ShieldTask {
	table: ProtectionTable;
	options: ShieldOptions;
	/** by cell: what withholding it loses */
	loss: readonly number[];
	knowers: Knowers;
	sums?: LineGuard;
}

/** The cells on which the protection of one own cell, in one quantity and direction, rests. */
interface Footing {
	own: OwnCell;
	quantity: string;
	direction: 1 | -1;
	cells: Set<number>;
}

/** Above the level by this share, so that rounding in the audit's programs does not count as a failure. */
const MARGIN = 1 + 1e-5;
/** Tiny cells are not quite free to move, as shares of the mean cell. */
const LEAST_WEIGHT = 1e-3;

/**
 * Chooses shields: cells that are withheld so that no own cell can be worked out. Safe, near the least loss, not
 * proven least. Own cells are taken from the widest level down; for each, quantity by quantity, the cheapest way to
 * move it up and down by its level is found with cells already withheld almost free, and the cells of that way are
 * withheld. What is withheld later can only widen an interval, so one pass protects all. A second pass shows each
 * shield again, dearest first, where every cell resting on it finds another footing among the withheld.
 * A line whose withheld cells are together too few gets the least of its other cells besides.
 * The order is fixed by weight and position, so the same table gives the same shields.
 * @param given cells that are withheld already and stay so
 * @returns positions of the shields, without own and given cells; null when even withholding every cell that may be withheld does not help.
 */
export function chooseShields(
	solver: Solver,
	task: ShieldTask,
	own: readonly OwnCell[],
	given: ReadonlySet<number> = new Set(),
): Set<number> | null {
	const { table, options } = task;
	const weights = task.loss.map((loss) => Math.max(LEAST_WEIGHT, loss));
	const kept = new Set([...own.map(({ index }) => index), ...given]);
	const hidden = new Set(kept);
	const grand = table.cells.findIndex((c) => c.coordinates.every((code, d) => code === table.hierarchies[d]!.root));
	const locked = new Set([...toldCells(options.told), ...(hidden.has(grand) ? [] : [grand])]);
	const augmenter = new Augmenter(solver, table, weights, hidden, locked);
	const find = footingFinder(task, augmenter);
	const hide = (cells: readonly number[]) => {
		for (const index of cells) if (!hidden.has(index)) augmenter.hide(index);
	};
	try {
		const footings: Footing[] = [];
		for (const wish of wishesOf(table, own, weights, options.told)) {
			let footing = find(wish, [], hide);
			if (!footing && options.grandTotal === "last_resort" && augmenter.locked.has(grand)) {
				augmenter.unlock(grand);
				footing = find(wish, [], hide);
			}
			if (!footing) return null;
			footings.push({ ...wish, cells: footing });
		}
		mixLines(task, augmenter, weights);
		showNeedless(task, augmenter, footings, kept, weights, find);
		return new Set([...hidden].filter((index) => !kept.has(index)).toSorted((a, b) => a - b));
	} finally {
		augmenter.dispose();
	}
}

type Find = (
	wish: Omit<Footing, "cells">,
	fixed: readonly number[],
	use?: (cells: readonly number[]) => void,
) => Set<number> | null;

/** Shows every shield that nothing rests on, or whose dependants can all stand elsewhere among the withheld. */
function showNeedless(
	task: ShieldTask,
	augmenter: Augmenter,
	footings: Footing[],
	kept: ReadonlySet<number>,
	weights: readonly number[],
	find: Find,
) {
	const resting = new Map<number, Set<Footing>>();
	const rest = (footing: Footing, index: number) => {
		const set = resting.get(index);
		if (set) set.add(footing);
		else resting.set(index, new Set([footing]));
	};
	for (const footing of footings) for (const index of footing.cells) rest(footing, index);
	const shields = [...augmenter.hidden].filter((index) => !kept.has(index));
	for (const shield of shields.toSorted((a, b) => weights[b]! - weights[a]! || a - b)) {
		const moves = new Map<Footing, Set<number>>();
		let needed = mixesLine(task, augmenter.hidden, shield);
		for (const footing of needed ? [] : (resting.get(shield) ?? [])) {
			const other = find(footing, [shield]);
			needed = !other || [...other].some((index) => !augmenter.hidden.has(index));
			if (needed) break;
			moves.set(footing, other!);
		}
		if (needed) continue;
		augmenter.show(shield);
		for (const [footing, cells] of moves) {
			for (const index of footing.cells) resting.get(index)?.delete(footing);
			footing.cells = cells;
			for (const index of cells) rest(footing, index);
		}
	}
}

/** Withholds one cell more of each line whose withheld cells are too few together, their sum being shown. */
function mixLines({ sums, options }: ShieldTask, augmenter: Augmenter, weights: readonly number[]) {
	const told = toldCells(options.told);
	const { hidden, locked } = augmenter;
	let narrow = sums?.(hidden) ?? [];
	while (narrow.length > 0) {
		const more = new Set<number>();
		for (const sum of narrow) {
			// Where the total is withheld, or another cell is, the sum may have room: the audit tells.
			if (!isKnown(sum, hidden)) continue;
			const open = sum.others.filter((index) => !locked.has(index) && !told.has(index));
			if (open.length > 0) more.add(open.reduce((least, index) => (weights[index]! < weights[least]! ? index : least)));
		}
		if (more.size === 0) return;
		for (const index of more) augmenter.hide(index);
		narrow = sums?.(hidden) ?? [];
	}
}

/** Whether a line's withheld cells are enough together only with this one. */
function mixesLine({ table, sums }: ShieldTask, hidden: ReadonlySet<number>, shield: number): boolean {
	if (!sums) return false;
	const lines = table.equations.filter(({ total, parts }) => total === shield || parts.includes(shield));
	const without = new Set(hidden);
	without.delete(shield);
	const known = (now: ReadonlySet<number>) => sums(now, lines).filter((sum) => isKnown(sum, now)).length;
	return known(without) > known(hidden);
}

/** Whether what is shown tells this sum as it stands: the total, and every other cell of the line. */
function isKnown({ others }: LineSum, hidden: ReadonlySet<number>): boolean {
	return !others.some((index) => hidden.has(index));
}

/** Finds on what a wish can stand, for the public and for each owner who knows better of a cell that moves. */
function footingFinder({ table, knowers }: ShieldTask, augmenter: Augmenter): Find {
	return ({ own, quantity, direction }, fixed, use) => {
		const level = own.levels[quantity]! * MARGIN;
		const value = table.cells[own.index]!.quantities[quantity]!.total;
		const move = direction > 0 ? level : -Math.min(level, value);
		const q = table.quantities.findIndex(({ key }) => key === quantity);
		const first = augmenter.find({ cell: own.index, quantity, move, fixed });
		if (!first) return null;
		const ways = [first];
		use?.(first.map(([index]) => index));
		for (const attacker of knowers.objectors(q, first)) {
			if (isSpared(attacker, own.index, direction)) continue;
			if (ways.some((way) => isPossibleTo(table, attacker, q, way))) continue;
			const atLeast = [...(attacker.holds ?? [])].map(([cell, amounts]) => [cell, amounts[q]!] as const);
			const known = [...fixed, ...attacker.knows];
			const way = augmenter.find({ cell: own.index, quantity, move, fixed: known, atLeast });
			if (!way) return null;
			ways.push(way);
			use?.(way.map(([index]) => index));
		}
		return new Set(ways.flatMap((way: readonly Moved[]) => way.map(([index]) => index)));
	};
}

/** From whom a cell need not be kept: its single owner; and, below its value, whoever has a part in it. */
function isSpared({ knows, holds }: Attacker, cell: number, direction: 1 | -1): boolean {
	return knows.includes(cell) || (direction < 0 && (holds?.has(cell) ?? false));
}

function wishesOf(table: ProtectionTable, own: readonly OwnCell[], weights: readonly number[], told: Told | undefined) {
	const ordered = own.toSorted((a, b) => weights[b.index]! - weights[a.index]! || a.index - b.index);
	return ordered.flatMap((cell) =>
		table.quantities.flatMap((quantity) => {
			const { key } = quantity;
			if (cell.levels[key] === 0 || isTold(told, quantity, cell.index)) return [];
			const directions: (1 | -1)[] = table.cells[cell.index]!.quantities[key]!.total > 0 ? [1, -1] : [1];
			return directions.map((direction) => ({ own: cell, quantity: key, direction }));
		}),
	);
}
