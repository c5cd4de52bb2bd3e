import { groupBy } from "#app/lib/group-by.ts";
import type { ProtectionRules } from "./rules.ts";
import { cellKey, type OwnerShare, type ProtectionTable, type TableHolding } from "./table.ts";

/** What one owner holds of a cell: by position in the table's quantities. */
export interface OwnerPart {
	owner: string;
	/** Whether the owner allows publication. */
	waived: boolean;
	amounts: readonly number[];
}

const NOBODY: readonly OwnerPart[] = [];

/**
 * Every owner's part of every cell, as far as the table tells owners apart: from its holdings, or, without them, from the
 * smallest cells that have a single owner. Where a quantity overlaps (an operation with two crops is one operation), a part
 * is at least as told here.
 * @returns by position of the cell, each owner once.
 */
export function partsOf(table: ProtectionTable): (cell: number) => readonly OwnerPart[] {
	const overlapping = table.quantities.map(({ overlapsOver = [] }) => overlapsOver.length > 0);
	const cells = new Map<number, Map<string, Mutable>>();
	for (const group of groupBy(table.holdings ?? soleHoldings(table), placeOf(table)).values()) {
		const { owner, waived = false } = group[0]!;
		for (const [cell, amounts] of together(table, group, overlapping)) {
			const owners = cells.get(cell) ?? new Map<string, Mutable>();
			cells.set(cell, owners);
			const part = owners.get(owner);
			if (part) amounts.forEach((amount, q) => (part.amounts[q]! += amount));
			else owners.set(owner, { owner, waived, amounts });
		}
	}
	const parts = new Map([...cells].map(([cell, owners]) => [cell, [...owners.values()]]));
	return (cell) => parts.get(cell) ?? NOBODY;
}

type Mutable = OwnerPart & { amounts: number[] };

/** Owner and place of a holding, whatever it is of: quantities overlap inside one place only. */
function placeOf(table: ProtectionTable): (holding: TableHolding) => string {
	const over = new Set(table.quantities.flatMap(({ overlapsOver = [] }) => overlapsOver));
	return ({ owner, cells }) => {
		const { coordinates } = table.cells[cells[0]!]!;
		return [owner, ...coordinates.filter((_, d) => !over.has(table.hierarchies[d]!.name))].join("\u0000");
	};
}

/** What holdings of one place come to in each cell. */
function together(table: ProtectionTable, group: readonly TableHolding[], overlapping: readonly boolean[]) {
	const sums = new Map<number, number[]>();
	for (const { amounts, cells } of group) {
		const own = table.quantities.map(({ key }) => amounts[key] ?? 0);
		for (const cell of cells) {
			const sofar = sums.get(cell);
			const joined = sofar?.map((amount, q) => (overlapping[q] ? Math.max(amount, own[q]!) : amount + own[q]!));
			sums.set(cell, joined ?? [...own]);
		}
	}
	return sums;
}

/** Holdings of the smallest cells that have one owner, for tables that do not tell owners apart. */
function soleHoldings(table: ProtectionTable): TableHolding[] {
	const position = new Map(table.cells.map((cell, index) => [cell.key, index]));
	const inner = new Set(table.equations.map(({ total }) => total));
	return table.cells.flatMap((cell, index): TableHolding[] => {
		if (cell.owners !== 1 || inner.has(index)) return [];
		const chains = cell.coordinates.map((code, d) => chainOf(table.hierarchies[d]!.parent, code));
		const around = chains.reduce<string[][]>((all, chain) => all.flatMap((a) => chain.map((c) => [...a, c])), [[]]);
		const amounts = Object.fromEntries(table.quantities.map(({ key }) => [key, cell.quantities[key]!.total]));
		const cells = around.map((coordinates) => position.get(cellKey(...coordinates))!);
		return [{ owner: cell.soleOwner ?? cell.key, amounts, cells }];
	});
}

function chainOf(parent: Readonly<Record<string, string>>, code: string): string[] {
	const above = parent[code];
	return above === undefined ? [code] : [code, ...chainOf(parent, above)];
}

/** Owners' parts as a share of one quantity: total, two largest, and what waivers and the (n, k) rule need. */
export function shareOf(parts: readonly OwnerPart[], q: number, rules: ProtectionRules): OwnerShare {
	const amounts = parts.map((part) => part.amounts[q]!).toSorted((a, b) => b - a);
	const unwaived = parts.flatMap(({ waived, amounts: own }) => (waived ? [] : [own[q]!])).toSorted((a, b) => b - a);
	const [top1 = 0, top2 = 0] = amounts;
	const first = unwaived[0] ?? 0;
	return {
		total: sum(amounts),
		top1,
		top2,
		...(first < top1 && { guarded: { first, other: top1 } }),
		largest: sum(unwaived.slice(0, rules.largest?.owners ?? 0)),
	};
}

function sum(list: readonly number[]): number {
	return list.reduce((a, b) => a + b, 0);
}
