import type { OwnCell } from "./levels.ts";
import { partsOf } from "./parts.ts";
import type { ProtectionTable } from "./table.ts";
import { publicBounds, type Told } from "./told.ts";

/**
 * Someone who may try to work out withheld cells, told as what they know beyond the shown cells, the equations and that
 * nothing is negative. The chooser and whoever audits test each attacker of a list alike, so that a new kind of attacker
 * is one more function that makes such a list. All values are absolute, in units of the quantity; cells are positions
 * in the table. What everybody knows (a public bound) belongs to every attacker of the list, `everybody` among them.
 */
export interface Attacker {
	/** For messages on the desk, such as `everybody` or an owner's key. */
	name: string;
	/** Cells whose value this attacker knows in every quantity, withheld or not. */
	knows: readonly number[];
	/** Cells of which this attacker knows a part, by position of the quantity: they are at least as much. */
	holds?: ReadonlyMap<number, readonly number[]>;
	/** Tighter than 0 and no upper end; the true value lies between. */
	bounds?: readonly { cell: number; quantity: string; lower: number; upper: number }[];
	/** lower <= sum of factor x value <= upper, such as a sum that an earlier release has shown; the truth fits. */
	relations?: readonly {
		quantity: string;
		cells: readonly number[];
		factors: readonly number[];
		lower: number;
		upper: number;
	}[];
	/**
	 * How far above (1) or below (-1) its value this own cell must still seem possible to this attacker; 0 asks nothing.
	 * Below the value it is at most the value itself.
	 */
	asks(own: OwnCell, quantity: string, direction: 1 | -1): number;
}

/** Who knows nothing but what is shown and what is known outside of this release. */
export function everybody(table: ProtectionTable, told?: Told): Attacker {
	return {
		name: "everybody",
		knows: [],
		bounds: publicBounds(table, told),
		asks: (own, quantity, direction) => levelOf(table, own, quantity, direction, told),
	};
}

/**
 * Every owner with all that the own answers tell: the value of a cell in which nobody else is, and that any other cell with a
 * part of theirs is at least as much as that part. A cell that its single owner knows is not protected from that owner;
 * where the owner has a part in the cell, only the upper side is asked: the level counts that part as known already.
 */
export function owners(table: ProtectionTable, told?: Told): Attacker[] {
	const parts = partsOf(table);
	type Held = { knows: number[]; holds: Map<number, readonly number[]> };
	const held = new Map<string, Held>();
	for (const [index, cell] of table.cells.entries()) {
		for (const { owner, amounts } of parts(index)) {
			const one: Held = held.get(owner) ?? { knows: [], holds: new Map() };
			held.set(owner, one);
			if (cell.owners === 1) one.knows.push(index);
			else one.holds.set(index, amounts);
		}
	}
	const bounds = publicBounds(table, told);
	return [...held].map(([name, { knows, holds }]) => ({
		name,
		knows,
		holds,
		bounds,
		asks: (own, quantity, direction) =>
			knows.includes(own.index) || (direction < 0 && holds.has(own.index))
				? 0
				: levelOf(table, own, quantity, direction, told),
	}));
}

function levelOf(
	table: ProtectionTable,
	own: OwnCell,
	quantity: string,
	direction: 1 | -1,
	told: Told | undefined,
): number {
	// What is told has nothing left to protect.
	if (told?.cells?.get(quantity)?.has(own.index)) return 0;
	const level = own.levels[quantity]!;
	return direction > 0 ? level : Math.min(level, table.cells[own.index]!.quantities[quantity]!.total);
}
