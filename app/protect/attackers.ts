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
 * Each owner who is alone in some cell. An own cell that its single owner knows is not protected from that owner; where
 * the owner has a part in the cell, only the upper side is asked: the level counts that owner's part as known already.
 */
export function soleOwners(table: ProtectionTable, told?: Told): Attacker[] {
	const bounds = publicBounds(table, told);
	return [...soleHoldings(table)].map(([name, knows]) => ({
		name,
		knows,
		bounds,
		asks: (own, quantity, direction) => {
			if (knows.includes(own.index)) return 0;
			if (direction < 0 && knows.some((cell) => liesInside(table, cell, own.index))) return 0;
			return levelOf(table, own, quantity, direction, told);
		},
	}));
}

/**
 * Single owners with all that they know: each cell that they have a part in is at least as much as that part. Whom to name,
 * the audit tells: most owners' parts are too small to help them.
 */
export function ownersWithParts(table: ProtectionTable, names: ReadonlySet<string>, told?: Told): Attacker[] {
	const parts = partsOf(table);
	const held = new Map([...names].map((name) => [name, new Map<number, readonly number[]>()]));
	for (const index of table.cells.keys()) {
		for (const { owner, amounts } of parts(index)) held.get(owner)?.set(index, amounts);
	}
	const seen = publicBounds(table, told);
	return [...held].map(([name, amounts]) => ({
		name,
		knows: [...amounts.keys()].filter((index) => table.cells[index]!.owners === 1),
		bounds: [
			...seen,
			...table.quantities.flatMap(({ key }, q) =>
				[...amounts].map(([cell, part]) => ({ cell, quantity: key, lower: part[q]!, upper: Infinity })),
			),
		],
		asks: (own, quantity, direction) => {
			const alone = table.cells[own.index]!.owners === 1;
			if (amounts.has(own.index) && (alone || direction < 0)) return 0;
			return levelOf(table, own, quantity, direction, told);
		},
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

/** owner -> cells in which this owner is the only one, and whose values this owner therefore knows */
export function soleHoldings(table: ProtectionTable): Map<string, number[]> {
	const holdings = new Map<string, number[]>();
	table.cells.forEach((cell, index) => {
		if (cell.owners !== 1) return;
		const owner = cell.soleOwner ?? cell.key;
		const known = holdings.get(owner);
		if (known) known.push(index);
		else holdings.set(owner, [index]);
	});
	return holdings;
}

/** Whether one cell lies inside another: in each tree the same code or one below it. */
export function liesInside(table: ProtectionTable, inner: number, outer: number): boolean {
	const wanted = table.cells[outer]!.coordinates;
	return table.cells[inner]!.coordinates.every((start, d) => {
		let code: string | undefined = start;
		while (code !== undefined && code !== wanted[d]) code = table.hierarchies[d]!.parent[code];
		return code !== undefined;
	});
}
