import { type AuditFailure, auditPattern, feasibleIntervals } from "./audit.ts";
import { roomOf, ROUNDING } from "./audit-widths.ts";
import type { OwnCell } from "./levels.ts";
import type { ProtectionRules } from "./rules.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable, Quantity } from "./table.ts";
import { isTold, type Told } from "./told.ts";

/** A little is left of what there is, so that programs of other tolerances find it too. */
const LEFT = 0.99;
/** So often what an owner leaves of a level is halved; then nothing is asked of it. */
const HALVINGS = 3;

export interface Cutting {
	table: ProtectionTable;
	rules: ProtectionRules;
	own: readonly OwnCell[];
	/** All that is known from outside, and the same without the other surveys. */
	told: Told;
	before: Told;
	ownersAttack: boolean;
}

/**
 * Own cells with levels that can be kept beside what other surveys of the season tell: where that leaves less room with
 * nothing of this release shown, no pattern could give more, and the level is cut to the room that there is. So a draft is
 * asked to add nothing to what is known already, and is not blocked for it.
 * What earlier releases of the survey and public sizes leave is no reason to cut: faults of theirs are as before.
 * @returns with how many cells other surveys tell, whole or in part.
 */
export function cutLevels(solver: Solver, work: Cutting): { own: OwnCell[]; knownElsewhere: number } {
	const { table, told, before } = work;
	const quantities = table.quantities.filter(({ key }) => countOf(told, key) > countOf(before, key));
	if (quantities.length === 0) return { own: [...work.own], knownElsewhere: 0 };
	const living = new Set([...table.cells.keys()].filter((index) => table.cells[index]!.owners > 0));
	const levels = new Levels(work.own);
	for (const quantity of quantities) cutToRoom(solver, work, levels, quantity, living);
	cutForOwners(solver, { ...work, table: { ...table, quantities } }, levels, living);
	return { own: levels.own, knownElsewhere: levels.known.size };
}

const countOf = ({ cells }: Told, key: string) => cells?.get(key)?.size ?? 0;

class Levels {
	own: OwnCell[];
	/** positions of cells that other surveys tell, whole or in part */
	readonly known = new Set<number>();

	constructor(own: readonly OwnCell[]) {
		this.own = [...own];
	}

	cut(index: number, key: string, share: number) {
		this.known.add(index);
		this.own = this.own.map((cell) =>
			cell.index === index ? { ...cell, levels: { ...cell.levels, [key]: cell.levels[key]! * share } } : cell,
		);
	}
}

/** By what everybody knows. */
function cutToRoom(
	solver: Solver,
	{ table, told, before }: Cutting,
	levels: Levels,
	quantity: Quantity,
	living: ReadonlySet<number>,
) {
	const { key } = quantity;
	const roomBeside = (what: Told) => {
		const intervals = feasibleIntervals(solver, table, quantity, living, what);
		return ({ index, levels: { [key]: level } }: OwnCell) => {
			const value = table.cells[index]!.quantities[key]!.total;
			const interval = intervals.get(table.cells[index]!.key);
			return interval ? roomOf(interval, { value, up: level!, down: Math.min(level!, value) }) : 0;
		};
	};
	const [room, roomBefore] = [roomBeside(told), roomBeside(before)];
	for (const cell of levels.own.filter(({ levels: { [key]: level } }) => level! > 0)) {
		// What is told outright has no level left: `everybody` asks none of it.
		if (isTold(told, quantity, cell.index)) {
			if (!isTold(before, quantity, cell.index)) levels.known.add(cell.index);
		} else if (room(cell) < 1 - ROUNDING && room(cell) < roomBefore(cell)) {
			levels.cut(cell.index, key, LEFT * room(cell));
		}
	}
}

/** By what each owner knows besides: by halves, until nobody finds a cell whose level is asked. */
function cutForOwners(
	solver: Solver,
	{ table, rules, told, before, ownersAttack }: Cutting,
	levels: Levels,
	living: ReadonlySet<number>,
) {
	const position = new Map(table.cells.map(({ key }, index) => [key, index]));
	const faultsBeside = (what: Told) => {
		const own = new Set(levels.own.map(({ index }) => index));
		const shields = new Set([...living].filter((index) => !own.has(index)));
		const { failures } = auditPattern(solver, table, levels.own, shields, { ownersAttack, rules, told: what });
		return failures.filter(({ kind, quantity }) => kind !== "in_line" && quantity !== null);
	};
	for (let round = 0; round <= HALVINGS; round++) {
		const faults = faultsBeside(told);
		if (faults.length === 0) return;
		const standing = new Set(faultsBeside(before).map(nameOf));
		for (const fault of faults.filter((one) => !standing.has(nameOf(one))))
			levels.cut(position.get(fault.cellKey)!, fault.quantity!, round < HALVINGS ? 0.5 : 0);
	}
}

const nameOf = ({ cellKey, quantity }: AuditFailure) => `${cellKey} ${quantity}`;
