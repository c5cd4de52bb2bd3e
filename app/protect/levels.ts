import type { RevisionGuard } from "./revision.ts";
import { ownReasons, shortfall, type OwnReason, type ProtectionRules } from "./rules.ts";
import type { ProtectionTable, Quantity, TableCell } from "./table.ts";

/** A cell withheld for its own sake, and how far from its value an attacker must stay, per quantity. */
export interface OwnCell {
	/** position in the table's cells */
	index: number;
	reasons: OwnReason[];
	/** By quantity key, in its units; 0 asks nothing. Below the value it is cut at 0, as nothing is negative. */
	levels: Readonly<Record<string, number>>;
}

/**
 * Cells withheld for their own sake, with their protection levels, in the table's order.
 * - dominated in a quantity: p/100 of the largest less the remainder, so that the second largest owner cannot estimate
 *   the largest to within p%; under the (n, k) rule 100/k of the largest less the total; the wider of the two (Handbook on
 *   Statistical Disclosure Control, section 4.2, table of protection levels);
 * - too few owners: p/100 of the largest, remainder or not. The handbook leaves this at 0, which would let the exact
 *   value of a withheld cell be worked out; with one or two owners both come to the same;
 * - another quantity of a dominated cell, and a cell withheld for any other reason: likewise p/100 of the largest, as the cell is withheld as a whole;
 * - a count: at least 1, so that another whole number is possible;
 * - a quantity that is 0 though owners answered (all was lost): p/100 of the mean owner in the nearest area or crop
 *   group that has any, upwards only. Where the whole table has none the zero is plain to see, and no level is asked.
 * @param keptBack cells that `guardRevision` keeps back, with the room that it asks for: the wider one counts, and for a cell
 *   without another reason this alone.
 * @param besideOthers likewise cells that `sharedCells` keeps back.
 */
export function ownCells(
	table: ProtectionTable,
	rules: ProtectionRules,
	keptBack: RevisionGuard["keptBack"] = new Map(),
	besideOthers: RevisionGuard["keptBack"] = new Map(),
): OwnCell[] {
	const wholes = wholesOf(table);
	return table.cells.flatMap((cell, index) => {
		const kept = cell.owners > 0 ? keptBack.get(cell.key) : undefined;
		const shared = cell.owners > 0 ? besideOthers.get(cell.key) : undefined;
		const own = ownReasons(cell, rules);
		const reasons: OwnReason[] = [...own];
		if (kept) reasons.push("revision");
		if (shared) reasons.push("other_survey");
		if (reasons.length === 0) return [];
		const few = own.includes("too_few_owners");
		const levels = Object.fromEntries(
			table.quantities.map((q) => {
				// What was a shield before has no room of its own to keep.
				const needed = own.length > 0 ? level(table, wholes, index, q, few, rules) : 0;
				const asked = Math.max(needed, kept?.[q.key] ?? 0, shared?.[q.key] ?? 0);
				return [q.key, q.counted && asked > 0 ? Math.max(1, asked) : asked] as const;
			}),
		);
		return [{ index, reasons, levels }];
	});
}

function level(
	table: ProtectionTable,
	wholes: readonly number[][],
	index: number,
	quantity: Quantity,
	few: boolean,
	rules: ProtectionRules,
): number {
	const share = table.cells[index]!.quantities[quantity.key]!;
	const part = rules.dominancePercent / 100;
	const short = shortfall(share, rules);
	if (share.top1 === 0) return part * meanOwner(table, wholes, index, quantity);
	return few || short === 0 ? Math.max(short, part * share.top1) : short;
}

/** Quantity per owner in the nearest whole that holds this cell and is not 0 too; 0 when there is none. */
function meanOwner(table: ProtectionTable, wholes: readonly number[][], index: number, quantity: Quantity): number {
	for (let ring = wholes[index]!; ring.length > 0; ring = ring.flatMap((i) => wholes[i]!)) {
		const means = ring.map((i) => perOwner(table.cells[i]!, quantity)).filter((mean) => mean > 0);
		if (means.length > 0) return Math.min(...means);
	}
	return 0;
}

function perOwner(cell: TableCell, quantity: Quantity): number {
	return cell.owners === 0 ? 0 : cell.quantities[quantity.key]!.total / cell.owners;
}

/** For each cell, the totals of which it is a part. */
export function wholesOf(table: ProtectionTable): number[][] {
	const wholes: number[][] = table.cells.map(() => []);
	for (const { total, parts } of table.equations) for (const part of parts) wholes[part]!.push(total);
	return wholes;
}
