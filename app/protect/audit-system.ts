import { groupBy } from "#app/lib/group-by.ts";
import type { AuditRow } from "./audit-program.ts";
import type { ProtectionTable, Quantity } from "./table.ts";

/** Smallest and largest value that fit all that is known. */
export type Interval = readonly [lower: number, upper: number];

/** Something whose value is not known for certain: a withheld cell, or what lies between two releases in one. */
export interface Unknown {
	value: number;
	/** What anybody knows of it: nothing is negative, a size is seen from the road. */
	lower: number;
	upper: number;
}

/**
 * What is known of unknowns, as distances from the truth: lower <= sum of factor x (value - true value) <= upper. The truth
 * itself is the point 0, and what is shown drops out.
 */
export interface Relation {
	unknowns: number[];
	factors: number[];
	lower: number;
	upper: number;
}

/** Unknowns that hang together through relations, apart from all others. */
export interface AuditBlock {
	/** Positions of the block's unknowns; a column each. */
	unknowns: number[];
	values: number[];
	/** Ends as distances, in multiples of `scale`. */
	ends: [lower: number, upper: number][];
	rows: AuditRow[];
	/** The mean value, so that the solver's tolerances mean the same in trees and in pounds. */
	scale: number;
}

/**
 * Lines of a table, read off the cells' coordinates by the audit itself: the cells that share all coordinates but one, where
 * theirs have the same code right above.
 */
export function linesOf(table: ProtectionTable): { total: number; parts: number[]; hierarchy: string }[] {
	const lines = new Map<string, { total: number; parts: number[]; hierarchy: string }>();
	const position = new Map(table.cells.map(({ coordinates }, index) => [coordinates.join("\u0000"), index]));
	table.hierarchies.forEach(({ name, parent }, d) => {
		table.cells.forEach(({ coordinates }, index) => {
			const above = parent[coordinates[d]!];
			if (above === undefined) return;
			const place = coordinates.with(d, above).join("\u0000");
			const line = lines.get(`${d}\u0000${place}`);
			if (line) line.parts.push(index);
			else lines.set(`${d}\u0000${place}`, { total: position.get(place)!, parts: [index], hierarchy: name });
		});
	});
	return [...lines.values()];
}

/**
 * What lines tell of a table's unknown cells in one quantity.
 * @param unknownOf the unknown that a cell is; undefined where its value is known.
 */
export function relationsOf(
	table: ProtectionTable,
	lines: ReturnType<typeof linesOf>,
	quantity: Quantity,
	unknownOf: (cell: number) => number | undefined,
): Relation[] {
	const value = (cell: number) => table.cells[cell]!.quantities[quantity.key]!.total;
	const relations: Relation[] = [];
	const add = (terms: readonly (readonly [cell: number, factor: number])[], lower: number, upper: number) => {
		const open = terms.flatMap(([cell, factor]) => {
			const unknown = unknownOf(cell);
			return unknown === undefined ? [] : [[unknown, factor] as const];
		});
		if (open.length === 0) return;
		relations.push({ unknowns: open.map(([u]) => u), factors: open.map(([, f]) => f), lower, upper });
	};
	for (const { total, parts, hierarchy } of lines) {
		const sum = [...parts.map((part) => [part, 1] as const), [total, -1] as const];
		if (!quantity.overlapsOver?.includes(hierarchy)) {
			add(sum, 0, 0);
			continue;
		}
		// Each part is at most the whole, and the whole at most all parts together.
		const twice = parts.reduce((whole, part) => whole + value(part), 0) - value(total);
		add(sum, Math.min(0, -twice), Infinity);
		for (const part of parts) {
			const pair = [[part, 1] as const, [total, -1] as const];
			add(pair, -Infinity, Math.max(0, value(total) - value(part)));
		}
	}
	return relations;
}

/** Takes the unknowns apart into blocks, each a program of its own. */
export function blocksOf(unknowns: readonly Unknown[], relations: readonly Relation[]): AuditBlock[] {
	const group = unknowns.map((_, index) => index);
	const leader = (index: number): number => {
		while (group[index] !== index) index = group[index] = group[group[index]!]!;
		return index;
	};
	for (const { unknowns: bound } of relations) for (const u of bound) group[leader(u)] = leader(bound[0]!);
	const members = groupBy([...unknowns.keys()], leader);
	const rows = groupBy(relations, (relation) => leader(relation.unknowns[0]!));
	return [...members].map(([top, list]) => blockOf(unknowns, list, rows.get(top) ?? []));
}

function blockOf(all: readonly Unknown[], list: number[], relations: readonly Relation[]): AuditBlock {
	const values = list.map((u) => all[u]!.value);
	const scale = values.reduce((sum, value) => sum + Math.abs(value), 0) / values.length || 1;
	const column = new Map(list.map((u, place) => [u, place]));
	return {
		unknowns: list,
		values,
		ends: list.map((u) => {
			const { value, lower, upper } = all[u]!;
			return [Math.min(0, lower - value) / scale, Math.max(0, upper - value) / scale];
		}),
		rows: relations.map(({ unknowns, factors, lower, upper }) => ({
			lower: lower / scale,
			upper: upper / scale,
			columns: unknowns.map((u) => column.get(u)!),
			factors,
		})),
		scale,
	};
}
