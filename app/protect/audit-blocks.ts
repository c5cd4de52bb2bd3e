import type { Row } from "./solver.ts";
import { overlaps, type ProtectionTable, type Quantity } from "./table.ts";

/**
 * Withheld cells that hang together in one quantity through equations, apart from all others. A column is how far a
 * cell's value may lie from the truth, so that the table itself is the point 0 and the shown cells drop out.
 */
export interface Block {
	cells: number[];
	/** true values, in the quantity's units */
	values: number[];
	/** in multiples of `scale` */
	rows: Row[];
	/** the mean value, so that the solver's tolerances mean the same in trees and in pounds */
	scale: number;
}

interface Relation {
	cells: number[];
	factors: number[];
	lower: number;
	upper: number;
}

export function blocksOf(table: ProtectionTable, quantity: Quantity, withheld: ReadonlySet<number>): Block[] {
	// A cell without owners is a published zero.
	const unknown = new Set([...withheld].filter((index) => table.cells[index]!.owners > 0));
	const relations = relationsOf(table, quantity, unknown);
	const group = new Map([...unknown].map((index) => [index, index]));
	const leader = (index: number): number => {
		let top = index;
		while (group.get(top) !== top) top = group.get(top)!;
		group.set(index, top);
		return top;
	};
	for (const { cells } of relations) for (const index of cells) group.set(leader(index), leader(cells[0]!));
	const members = gather(
		[...unknown].toSorted((a, b) => a - b),
		leader,
	);
	const bound = gather(relations, ({ cells }) => leader(cells[0]!));
	return [...members].map(([top, cells]) => {
		const values = cells.map((index) => table.cells[index]!.quantities[quantity.key]!.total);
		const scale = values.reduce((a, b) => a + b, 0) / values.length || 1;
		const column = new Map(cells.map((index, place) => [index, place]));
		const rows = (bound.get(top) ?? []).map((relation) => ({
			lower: relation.lower / scale,
			upper: relation.upper / scale,
			columns: relation.cells.map((index) => column.get(index)!),
			factors: relation.factors,
		}));
		return { cells, values, rows, scale };
	});
}

/** What is known of the unknown cells' distances from the truth, the shown ones having none. */
function relationsOf(table: ProtectionTable, quantity: Quantity, unknown: ReadonlySet<number>): Relation[] {
	const value = (index: number) => table.cells[index]!.quantities[quantity.key]!.total;
	const relations: Relation[] = [];
	const add = (terms: [number, number][], lower: number, upper: number) => {
		const left = terms.filter(([index]) => unknown.has(index));
		if (left.length === 0) return;
		relations.push({ cells: left.map(([index]) => index), factors: left.map(([, f]) => f), lower, upper });
	};
	for (const equation of table.equations) {
		const { total, parts } = equation;
		const sum: [number, number][] = [...parts.map((part): [number, number] => [part, 1]), [total, -1]];
		if (!overlaps(quantity, equation)) {
			add(sum, 0, 0);
			continue;
		}
		const overlap = parts.reduce((whole, part) => whole + value(part), 0) - value(total);
		add(sum, -Math.max(0, overlap), Infinity);
		for (const part of parts) {
			const pair: [number, number][] = [
				[part, 1],
				[total, -1],
			];
			add(pair, -Infinity, Math.max(0, value(total) - value(part)));
		}
	}
	return relations;
}

function gather<T>(items: readonly T[], keyOf: (item: T) => number): Map<number, T[]> {
	const groups = new Map<number, T[]>();
	for (const item of items) {
		const key = keyOf(item);
		const list = groups.get(key);
		if (list) list.push(item);
		else groups.set(key, [item]);
	}
	return groups;
}
