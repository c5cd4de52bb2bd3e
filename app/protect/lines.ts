import { type OwnerPart, partsOf, shareOf } from "./parts.ts";
import { type ProtectionRules, shortfall } from "./rules.ts";
import type { Equation, OwnerShare, ProtectionTable, Quantity } from "./table.ts";

/**
 * Withheld cells of one line that are together too few, or dominated: as one cell they would be withheld, so their sum must
 * not be found closely either. Where the line's total is shown, the sum of all its withheld cells is known for certain.
 */
export interface LineSum {
	/** Positions of the cells, two or more. */
	cells: readonly number[];
	/** The line that they are in: positions of its other parts and of its total. */
	others: readonly number[];
	/** Position of the line's total: where it is shown, what the line withholds is known as a sum. */
	total: number;
	/** Room that the sum must have, by quantity; those in which the line does not add up are left out. */
	levels: Readonly<Record<string, number>>;
}

/**
 * Every sum of a line's withheld cells that breaks a rule: of all of them, and of those withheld for their own sake. Each
 * owner counts once, in however many of the cells; without knowing owners apart, once in each.
 */
export function guardedSums(
	table: ProtectionTable,
	rules: ProtectionRules,
	own: ReadonlySet<number>,
	withheld: ReadonlySet<number>,
): LineSum[] {
	return lineGuard(table, rules, own)(withheld);
}

/** The same for many patterns of one table, and for some of its lines alone. */
export type LineGuard = (withheld: ReadonlySet<number>, lines?: readonly Equation[]) => LineSum[];

export function lineGuard(table: ProtectionTable, rules: ProtectionRules, own: ReadonlySet<number>): LineGuard {
	const shares = sharer(table, rules);
	return (withheld, lines = table.equations) =>
		lines.flatMap((line) => sumsOf(table, rules, shares, own, withheld, line));
}

function sumsOf(
	table: ProtectionTable,
	rules: ProtectionRules,
	shares: Sharer,
	own: ReadonlySet<number>,
	withheld: ReadonlySet<number>,
	{ total, parts, hierarchy }: Equation,
): LineSum[] {
	const hidden = parts.filter((index) => withheld.has(index) && table.cells[index]!.owners > 0);
	const ownOnly = hidden.filter((index) => own.has(index));
	const sets = ownOnly.length < hidden.length ? [hidden, ownOnly] : [hidden];
	const added = table.quantities.filter((quantity) => !quantity.overlapsOver?.includes(hierarchy));
	return sets.flatMap((cells): LineSum[] => {
		if (cells.length < 2) return [];
		const levels = levelsOf(cells, added, rules, shares);
		if (!levels) return [];
		const others = [...parts.filter((index) => !cells.includes(index)), total];
		return [{ cells, others: others.filter((index) => table.cells[index]!.owners > 0), total, levels }];
	});
}

/** The cells as one: how many owners they have, and their shares of a quantity. */
type Sharer = (cells: readonly number[]) => { owners: number; share: (quantity: Quantity) => OwnerShare };

function levelsOf(
	cells: readonly number[],
	quantities: readonly Quantity[],
	rules: ProtectionRules,
	shares: Sharer,
): Record<string, number> | null {
	const { owners, share } = shares(cells);
	const few = owners < rules.minimumOwners;
	const asked = quantities.map((quantity) => {
		const of = share(quantity);
		const short = shortfall(of, rules);
		return { quantity, short, level: few ? Math.max(short, (rules.dominancePercent / 100) * of.top1) : short };
	});
	if (!few && asked.every(({ short }) => short === 0)) return null;
	return Object.fromEntries(
		asked
			.filter(({ level }) => level > 0)
			.map(({ quantity, level }) => [quantity.key, quantity.counted ? Math.max(1, level) : level] as const),
	);
}

function sharer(table: ProtectionTable, rules: ProtectionRules): Sharer {
	if (!table.holdings) return (cells) => apart(table, cells);
	const parts = partsOf(table);
	return (cells) => together(table, rules, cells, parts);
}

function together(
	table: ProtectionTable,
	rules: ProtectionRules,
	cells: readonly number[],
	parts: (cell: number) => readonly OwnerPart[],
): ReturnType<Sharer> {
	const owners = new Map<string, OwnerPart>();
	for (const cell of cells) {
		for (const part of parts(cell)) {
			const sofar = owners.get(part.owner);
			const amounts = sofar ? sofar.amounts.map((amount, q) => amount + part.amounts[q]!) : part.amounts;
			owners.set(part.owner, { ...part, amounts });
		}
	}
	const list = [...owners.values()];
	const share = (quantity: Quantity) => shareOf(list, table.quantities.indexOf(quantity), rules);
	return { owners: owners.size, share };
}

function apart(table: ProtectionTable, cells: readonly number[]): ReturnType<Sharer> {
	const list = cells.map((index) => table.cells[index]!);
	const share = ({ key }: Quantity): OwnerShare => {
		const shares = list.map((cell) => cell.quantities[key]!);
		const [top1 = 0, top2 = 0] = shares.flatMap((one) => [one.top1, one.top2]).toSorted((a, b) => b - a);
		// As if the largest of each were one and the same: at least as strict as whoever they are.
		const largest = sum(shares.map((one) => one.largest ?? 0));
		return { total: sum(shares.map(({ total }) => total)), top1, top2, largest };
	};
	return { owners: sum(list.map(({ owners }) => owners)), share };
}

function sum(list: readonly number[]): number {
	return list.reduce((a, b) => a + b, 0);
}
