/** One quantity's sum in one cell, with the sums of its two largest owners (0 where there is none). */
export interface OwnerShare {
	total: number;
	top1: number;
	top2: number;
	/** Where owners allowed publication: the largest who did not, and the largest other owner. Left out where nobody did. */
	guarded?: { first: number; other: number };
	/** Sum of the n largest owners without a waiver, where the rules use (n, k). */
	largest?: number;
}

/** One cell: one crop in one area, for all its quantities alike. */
export interface TableCell {
	key: string;
	/** One code per hierarchy, in the table's order; here area, then crop. */
	coordinates: readonly string[];
	/** Distinct owners who answered; 0 means that nobody here grows it. */
	owners: number;
	/** Owners behind the measure that the fewest answered, where that is fewer: its figure would be theirs alone. */
	fewestOwners?: number;
	quantities: Readonly<Record<string, OwnerShare>>;
	/** Whether all who answered a sensitive question gave one and the same answer. */
	uniform?: boolean;
	/** The one owner of a cell with a single owner, so that this owner is tried as an attacker; else null. */
	soleOwner?: string | null;
}

/** A tree of codes, such as county < district < state < region. */
export interface Hierarchy {
	name: string;
	root: string;
	/** child -> parent, for every code but the root */
	parent: Readonly<Record<string, string>>;
}

/**
 * A base quantity. Trees and pounds add up over areas and over crops. A count of operations adds up over areas only:
 * an operation with two crops is counted in each and once in all crops, so over crops it `overlaps`.
 */
export interface Quantity {
	key: string;
	/** Names of the hierarchies over which parts overlap: the whole lies between its largest part and their sum. */
	overlapsOver?: readonly string[];
	/** Whole numbers, such as counts: the interval must then hold another whole number. */
	counted?: boolean;
}

/** total = sum of parts, as positions in `cells`; or, overlapping, max(parts) <= total <= sum of parts. */
export interface Equation {
	total: number;
	parts: readonly number[];
	hierarchy: string;
}

export interface ProtectionTable {
	hierarchies: readonly Hierarchy[];
	quantities: readonly Quantity[];
	cells: readonly TableCell[];
	equations: readonly Equation[];
	/** Who holds what, where owners can be told apart. */
	holdings?: readonly TableHolding[];
}

export interface TableHolding {
	owner: string;
	waived?: boolean;
	amounts: Readonly<Record<string, number>>;
	/** Positions of all cells that it is counted in, the smallest first. */
	cells: readonly number[];
}

/** The key of a cell, from its coordinates in the table's order: `55001|apple`. */
export function cellKey(...coordinates: readonly string[]): string {
	return coordinates.join("|");
}

/**
 * A whole table from the cells that have growers. Every combination of codes becomes a cell; one that is not given has
 * no owners. Equations follow from the trees: one for each inner code of a tree and each combination of the others.
 * @throws {RangeError} for an unknown code, a cell given twice, a negative value, or cells that do not add up.
 */
export function buildTable(input: {
	hierarchies: readonly Hierarchy[];
	quantities: readonly Quantity[];
	cells: readonly Omit<TableCell, "key">[];
}): ProtectionTable {
	const { hierarchies, quantities } = input;
	const codes = hierarchies.map((tree) => [tree.root, ...Object.keys(tree.parent)]);
	const known = codes.map((list) => new Set(list));
	const given = new Map<string, TableCell>();
	for (const cell of input.cells) {
		const key = cellKey(...cell.coordinates);
		cell.coordinates.forEach((code, d) => {
			if (!known[d]?.has(code)) throw new RangeError(`cell ${key} lies outside ${hierarchies[d]?.name}`);
		});
		if (given.has(key)) throw new RangeError(`cell ${key} is given twice`);
		for (const { key: quantity } of quantities) checkShare(key, quantity, cell.quantities[quantity]);
		given.set(key, { ...cell, key });
	}
	const none = Object.fromEntries(quantities.map(({ key }) => [key, { total: 0, top1: 0, top2: 0, largest: 0 }]));
	const cells = combinations(codes).map((coordinates) => {
		const key = cellKey(...coordinates);
		return given.get(key) ?? { key, coordinates, owners: 0, quantities: none };
	});
	const table = { hierarchies, quantities, cells, equations: equationsOf(hierarchies, cells) };
	checkSums(table);
	return table;
}

/** Whether the parts of this equation overlap in this quantity, so that they bound the whole and do not add up to it. */
export function overlaps(quantity: Quantity, equation: Equation): boolean {
	return quantity.overlapsOver?.includes(equation.hierarchy) ?? false;
}

function combinations(codes: readonly (readonly string[])[]): string[][] {
	return codes.reduce<string[][]>(
		(sofar, list) => sofar.flatMap((start) => list.map((code) => [...start, code])),
		[[]],
	);
}

function equationsOf(hierarchies: readonly Hierarchy[], cells: readonly TableCell[]): Equation[] {
	const position = new Map(cells.map((cell, i) => [cell.key, i]));
	const children = hierarchies.map(childrenOf);
	const equations: Equation[] = [];
	hierarchies.forEach((tree, d) => {
		cells.forEach((cell, total) => {
			const below = children[d]!.get(cell.coordinates[d]!);
			if (!below) return;
			const parts = below.map((code) => position.get(cellKey(...cell.coordinates.with(d, code)))!);
			equations.push({ total, parts, hierarchy: tree.name });
		});
	});
	return equations;
}

/** inner code -> the codes right below it */
export function childrenOf(tree: Hierarchy): Map<string, string[]> {
	const children = new Map<string, string[]>();
	for (const [code, parent] of Object.entries(tree.parent)) {
		const siblings = children.get(parent);
		if (siblings) siblings.push(code);
		else children.set(parent, [code]);
	}
	return children;
}

function checkShare(key: string, quantity: string, share: OwnerShare | undefined) {
	const good = share && share.top2 >= 0 && share.top1 >= share.top2 && Number.isFinite(share.total);
	if (!good || share.top1 + share.top2 > share.total * (1 + 1e-9)) {
		throw new RangeError(`cell ${key} has no usable owner shares of ${quantity}`);
	}
}

function checkSums({ quantities, cells, equations }: ProtectionTable) {
	for (const quantity of quantities) {
		const value = (i: number) => cells[i]!.quantities[quantity.key]!.total;
		for (const equation of equations) {
			const total = value(equation.total);
			const parts = equation.parts.map(value);
			const sum = parts.reduce((a, b) => a + b, 0);
			const slack = 1e-9 * Math.max(total, sum);
			const fits = overlaps(quantity, equation)
				? total <= sum + slack && Math.max(...parts) <= total + slack
				: Math.abs(total - sum) <= slack;
			if (!fits) throw new RangeError(`${quantity.key} does not add up to cell ${cells[equation.total]!.key}`);
		}
	}
}
