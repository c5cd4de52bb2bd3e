import { childrenOf, type ProtectionTable } from "./table.ts";

/** A part of the table that is small enough to be solved by itself: the areas right and far below one. */
export interface TableBlock {
	/** code of the area whose parts these are; the root where the block is the whole table */
	root: string;
	/** cells below the root that somebody grows, in the table's order */
	inside: number[];
	/** cells of the root itself: they tie the block to the rest */
	margins: number[];
}

/** Cells times quantities up to which a block is solved in one; beyond it is taken apart. */
const LARGEST = 2500;

/**
 * Takes a table apart along its largest tree, into the largest blocks that are small enough. A table that is small
 * enough is one block, with no margins. Cells above all blocks are in none.
 */
export function blocksOfTable(table: ProtectionTable, largest = LARGEST): TableBlock[] {
	const most = largest / table.quantities.length;
	const living = table.cells.flatMap((cell, index) => (cell.owners > 0 ? [index] : []));
	const sizes = table.hierarchies.map((tree) => Object.keys(tree.parent).length);
	const d = sizes.indexOf(Math.max(...sizes));
	const tree = table.hierarchies[d]!;
	if (living.length <= most) return [{ root: tree.root, inside: living, margins: [] }];

	const children = childrenOf(tree);
	const byCode = new Map<string, number[]>();
	for (const index of living) {
		const code = table.cells[index]!.coordinates[d]!;
		const list = byCode.get(code);
		if (list) list.push(index);
		else byCode.set(code, [index]);
	}
	const at = (code: string): number[] => byCode.get(code) ?? [];
	const below = (code: string): number[] =>
		(children.get(code) ?? []).flatMap((child) => [...at(child), ...below(child)]);
	const blocks: TableBlock[] = [];
	const take = (code: string) => {
		const inside = below(code);
		if (inside.length === 0) return;
		const small = code !== tree.root && inside.length + at(code).length <= most;
		const parts = children.get(code)!;
		// Single areas are not taken apart: a block of many counties without districts stays whole, whatever its size.
		if (small || parts.every((child) => !children.has(child))) {
			blocks.push({ root: code, inside: inside.toSorted((a, b) => a - b), margins: at(code) });
		} else parts.forEach(take);
	};
	take(tree.root);
	return blocks;
}
