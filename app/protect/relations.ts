import { overlaps, type ProtectionTable, type Quantity } from "./table.ts";

/** lower <= sum of factor x (distance of a cell from its true value) <= upper, in units of the quantity. */
export interface Relation {
	cells: number[];
	factors: number[];
	lower: number;
	upper: number;
}

/**
 * What the equations say of the members' distances from the truth, all other cells standing still; or, those being
 * free, what holds whatever the others are, which is nothing where an equation has one of them. Parts that add up
 * give one relation with 0 on both sides; parts that overlap give the bounds of `Equation`, with the room that the true
 * values leave.
 */
export function relationsAmong(
	table: ProtectionTable,
	quantity: Quantity,
	members: { has(index: number): boolean },
	outside: "still" | "free" = "still",
): Relation[] {
	const value = (index: number) => table.cells[index]!.quantities[quantity.key]!.total;
	const relations: Relation[] = [];
	const add = (terms: readonly (readonly [number, number])[], lower: number, upper: number) => {
		const inside = terms.filter(([index]) => members.has(index));
		if (inside.length === 0) return;
		const living = outside === "still" ? inside : terms.filter(([index]) => table.cells[index]!.owners > 0);
		if (inside.length < living.length) return;
		relations.push({ cells: inside.map(([index]) => index), factors: inside.map(([, f]) => f), lower, upper });
	};
	for (const equation of table.equations) {
		const { total, parts } = equation;
		const terms = [...parts.map((part) => [part, 1] as const), [total, -1] as const];
		if (!overlaps(quantity, equation)) {
			add(terms, 0, 0);
			continue;
		}
		const overlap = parts.reduce((sum, part) => sum + value(part), 0) - value(total);
		add(terms, -Math.max(0, overlap), Infinity);
		for (const part of parts) {
			const pair = [[part, 1] as const, [total, -1] as const];
			add(pair, -Infinity, Math.max(0, value(total) - value(part)));
		}
	}
	return relations;
}
