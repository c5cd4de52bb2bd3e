import type { ProtectionTable, Quantity } from "./table.ts";

/** What anybody knows besides this release. */
export interface Told {
	/** By quantity key, positions of cells whose value other releases show: earlier ones, or other surveys of the season. */
	cells?: ReadonlyMap<string, ReadonlySet<number>>;
	/** f: an amount is seen to lie within [value / f, f x value], as a size class would tell. */
	publicFactor?: number | null;
}

export function isTold(told: Told | undefined, quantity: Quantity, cell: number): boolean {
	return told?.cells?.get(quantity.key)?.has(cell) ?? false;
}

/**
 * Between which ends anybody knows a withheld value to lie. A size is seen in amounts: how many answered is not, nor that
 * everything was lost.
 */
export function publicEnds(
	value: number,
	quantity: Quantity,
	told: Told | undefined,
): { lower: number; upper: number } {
	const factor = told?.publicFactor;
	if (factor == null || quantity.counted || value === 0) return { lower: 0, upper: Infinity };
	return { lower: value / factor, upper: value * factor };
}

/** The same for every cell that is told or seen, as bounds of an attacker. */
export function publicBounds(table: ProtectionTable, told: Told | undefined) {
	return table.quantities.flatMap((quantity) =>
		table.cells.flatMap((cell, index) => {
			const value = cell.quantities[quantity.key]!.total;
			if (isTold(told, quantity, index)) return [{ cell: index, quantity: quantity.key, lower: value, upper: value }];
			const ends = publicEnds(value, quantity, told);
			return cell.owners === 0 || ends.upper === Infinity ? [] : [{ cell: index, quantity: quantity.key, ...ends }];
		}),
	);
}

/** Cells that are told in any quantity: withholding them hides little, and moving them is seen. */
export function toldCells(told: Told | undefined): Set<number> {
	return new Set([...(told?.cells?.values() ?? [])].flatMap((cells) => [...cells]));
}
