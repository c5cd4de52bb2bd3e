import { liesInside, soleHoldings } from "./attackers.ts";
import { Augmenter } from "./augment.ts";
import type { OwnCell } from "./levels.ts";
import { lossByCell, type Objective } from "./loss.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";
import { isTold, type Told, toldCells } from "./told.ts";

export interface ShieldOptions {
	/** Whether single owners of cells are attackers who know those cells. */
	ownersAttack: boolean;
	/** Whether the total of everything may be withheld when nothing else helps. */
	grandTotal: "last_resort" | "never";
	/** `value` where it is not given */
	objective?: Objective;
	/** What is known from outside: cells of these cannot shield. */
	told?: Told;
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
 * The order is fixed by weight and position, so the same table gives the same shields.
 * @param given cells that are withheld already and stay so
 * @returns positions of the shields, without own and given cells; null when even withholding every cell that may be withheld does not help.
 */
export function chooseShields(
	solver: Solver,
	table: ProtectionTable,
	own: readonly OwnCell[],
	options: ShieldOptions,
	given: ReadonlySet<number> = new Set(),
): Set<number> | null {
	const weights = lossByCell(table, options.objective ?? "value").map((loss) => Math.max(LEAST_WEIGHT, loss));
	const kept = new Set([...own.map(({ index }) => index), ...given]);
	const hidden = new Set(kept);
	const grand = table.cells.findIndex((c) => c.coordinates.every((code, d) => code === table.hierarchies[d]!.root));
	const locked = new Set([...toldCells(options.told), ...(hidden.has(grand) ? [] : [grand])]);
	const augmenter = new Augmenter(solver, table, weights, hidden, locked);
	const find = footingFinder(table, augmenter, options);
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
		showNeedless(augmenter, footings, kept, weights, find);
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
		let needed = false;
		for (const footing of resting.get(shield) ?? []) {
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

/** Finds on what a wish can stand, for the public and for each single owner who knows a cell of it. */
function footingFinder(table: ProtectionTable, augmenter: Augmenter, options: ShieldOptions): Find {
	const holdings = options.ownersAttack ? soleHoldings(table) : new Map<string, number[]>();
	const ownerOf = new Map([...holdings].flatMap(([owner, cells]) => cells.map((index) => [index, owner] as const)));
	return ({ own, quantity, direction }, fixed, use) => {
		const level = own.levels[quantity]! * MARGIN;
		const value = table.cells[own.index]!.quantities[quantity]!.total;
		const move = direction > 0 ? level : -Math.min(level, value);
		const first = augmenter.find({ cell: own.index, quantity, move, fixed });
		if (!first) return null;
		use?.(first);
		const footing = new Set(first);
		const attackers = new Set(first.flatMap((index) => ownerOf.get(index) ?? []));
		attackers.delete(ownerOf.get(own.index) ?? "");
		for (const attacker of attackers) {
			const known = holdings.get(attacker)!;
			if (direction < 0 && known.some((index) => liesInside(table, index, own.index))) continue;
			const way = augmenter.find({ cell: own.index, quantity, move, fixed: [...fixed, ...known] });
			if (!way) return null;
			use?.(way);
			for (const index of way) footing.add(index);
		}
		return footing;
	};
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
