import type { ProtectionTable } from "./table.ts";

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
