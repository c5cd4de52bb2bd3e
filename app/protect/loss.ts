import type { ProtectionTable } from "./table.ts";

/** What is counted as lost when a cell is withheld: its share of the quantities, or simply one cell. */
export type Objective = "value" | "count";

/** A cell of nothing is still a cell: withholding it costs this share of the mean cell, so that it is not done idly. */
const LEAST = 1e-6;

/**
 * Lost information by cell. For `value` a cell's mean share over the quantities, 1 being the mean cell's, so that with
 * one quantity the sums compare as the values do; for `count` 1 each. A cell without owners is never withheld: 0.
 */
export function lossByCell(table: ProtectionTable, objective: Objective): number[] {
	if (objective === "count") return table.cells.map((cell) => (cell.owners > 0 ? 1 : 0));
	const living = table.cells.filter((cell) => cell.owners > 0).length;
	const sums = table.quantities.map(({ key }) => table.cells.reduce((sum, c) => sum + c.quantities[key]!.total, 0));
	const used = Math.max(1, sums.filter((sum) => sum > 0).length);
	return table.cells.map((cell) => {
		if (cell.owners === 0) return 0;
		const shares = table.quantities.map(({ key }, q) => (sums[q]! > 0 ? cell.quantities[key]!.total / sums[q]! : 0));
		return Math.max(LEAST, (shares.reduce((a, b) => a + b, 0) / used) * living);
	});
}

export function sumOver(cells: Iterable<number>, loss: readonly number[]): number {
	let sum = 0;
	for (const index of cells) sum += loss[index]!;
	return sum;
}
