import { linesOf, type Relation, relationsOf, type Unknown } from "./audit-system.ts";
import { REGION } from "./codes.ts";
import type { KnownPart } from "./audit-owners.ts";
import type { Holding } from "./holdings.ts";
import { tableOfHoldings } from "./holdings-table.ts";
import { type OwnCell, ownCells } from "./levels.ts";
import { partsOf } from "./parts.ts";
import type { ProtectionRules } from "./rules.ts";
import { amountsOf, aroundWithin, type OtherSurvey, sameCells, type SharedReleases } from "./shared-cells.ts";
import type { ProtectionTable, Quantity } from "./table.ts";
import { isTold, publicEnds, type Told } from "./told.ts";

/** All that the other survey asked in states that are not asked here, as one county. Taken as known: it is mostly shown. */
const ELSEWHERE = "elsewhere";

interface JointTable {
	table: ProtectionTable;
	quantity: Quantity;
	lines: ReturnType<typeof linesOf>;
	own: readonly OwnCell[];
	parts: ReturnType<typeof partsOf>;
	/** Whether the cell at this position is known, whatever the draft withholds. */
	isKnown: (cell: number) => boolean;
	/** By position: the table and position where the very same value was met first. */
	firstOf: (cell: number) => readonly [table: number, cell: number];
}

/** An unknown of the joint program: where it stands first, and whether more than the draft's own lines bind it. */
export interface JointSystem {
	unknowns: Unknown[];
	relations: Relation[];
	sources: (readonly [table: number, cell: number])[];
	/** Unknowns in lines of other surveys. */
	elsewhere: Set<number>;
	unknownOf: (table: number, cell: number) => number | undefined;
}

/** In one quantity, the draft's table and those of other surveys' releases, with cells of the same value as one. */
export class JointTables {
	readonly tables: JointTable[];

	constructor(
		draft: { table: ProtectionTable; quantity: Quantity; own: readonly OwnCell[]; told: Told; rules: ProtectionRules },
		{ areas, holdings, others }: SharedReleases,
	) {
		const { table, quantity, own, told, rules } = draft;
		const here = { table, quantity, lines: linesOf(table), own, parts: partsOf(table) };
		const none = (cell: number) => table.cells[cell]!.owners === 0 || isTold(told, quantity, cell);
		this.tables = [{ ...here, isKnown: none, firstOf: (cell) => [0, cell] }];
		const around = aroundWithin(areas);
		const asked = others.filter(({ quantities }) => quantities.includes(quantity.key));
		const positions = [positionsOf(table)];
		for (const other of asked) {
			const made = otherTable(other, areas, quantity.key, rules);
			const before = [{ holdings }, ...asked.slice(0, this.tables.length - 1)];
			const same = before.map((one) => sameCells(one.holdings, other.holdings, quantity.key, around));
			const at = this.tables.length;
			positions.push(positionsOf(made));
			const { cells } = made;
			const isKnown = (cell: number) =>
				cells[cell]!.owners === 0 || other.shown.has(cells[cell]!.key) || cells[cell]!.coordinates[0] === ELSEWHERE;
			const firstOf = (cell: number): readonly [number, number] => {
				const { key } = cells[cell]!;
				const first = same.findIndex((keys, t) => keys.has(key) && positions[t]!.has(key));
				return first === -1 ? [at, cell] : this.tables[first]!.firstOf(positions[first]!.get(key)!);
			};
			const madeQuantity = made.quantities[0]!;
			this.tables.push({
				table: made,
				quantity: madeQuantity,
				lines: linesOf(made),
				own: ownCells(made, rules),
				parts: partsOf(made),
				isKnown,
				firstOf,
			});
		}
	}

	/** What each owner knows of a cell, the largest part first. */
	partsAt(t: number, cell: number): KnownPart[] {
		const { table, quantity, parts } = this.tables[t]!;
		const q = table.quantities.indexOf(quantity);
		const alone = table.cells[cell]!.owners === 1;
		return parts(cell)
			.map(({ owner, amounts }) => ({ owner, amount: amounts[q]!, alone }))
			.toSorted((a, b) => b.amount - a.amount);
	}

	/** @param isShown of the draft's own cells */
	system(isShown: (cell: number) => boolean, told: Told): JointSystem {
		const unknowns: Unknown[] = [];
		const sources: JointSystem["sources"] = [];
		const elsewhere = new Set<number>();
		const places = new Map<string, number>();
		const known = new Set<string>();
		const each = (use: (t: number, cell: number, name: string) => void) =>
			this.tables.forEach(({ table, firstOf }, t) =>
				table.cells.forEach((_, cell) => use(t, cell, firstOf(cell).join(" "))),
			);
		each((t, cell, name) => {
			if (this.tables[t]!.isKnown(cell) || (t === 0 && isShown(cell))) known.add(name);
		});
		each((t, cell, name) => {
			if (known.has(name)) return;
			const { table, quantity, firstOf } = this.tables[t]!;
			if (!places.has(name)) {
				const value = table.cells[cell]!.quantities[quantity.key]!.total;
				places.set(name, unknowns.push({ value, ...publicEnds(value, quantity, told) }) - 1);
				sources.push(firstOf(cell));
			}
			if (t > 0) elsewhere.add(places.get(name)!);
		});
		const unknownOf = (t: number, cell: number) => places.get(this.tables[t]!.firstOf(cell).join(" "));
		const relations = this.tables.flatMap(({ table, lines, quantity }, t) =>
			relationsOf(table, lines, quantity, (cell) => unknownOf(t, cell)),
		);
		return { unknowns, relations, sources, elsewhere, unknownOf };
	}
}

function positionsOf({ cells }: ProtectionTable): Map<string, number> {
	return new Map(cells.map(({ key }, index) => [key, index]));
}

function otherTable(
	{ holdings }: OtherSurvey,
	areas: SharedReleases["areas"],
	quantity: string,
	rules: ProtectionRules,
): ProtectionTable {
	const inside = new Set(areas.map(({ areaKey }) => areaKey));
	const there = amountsOf(holdings, quantity).map((one): Holding =>
		inside.has(one.areaKey) ? one : { ...one, areaKey: ELSEWHERE },
	);
	const joined = new Map<string, Holding>();
	for (const one of there) {
		const name = [one.owner, one.areaKey, one.cropKey].join(" ");
		const sofar = joined.get(name)?.amounts[quantity] ?? 0;
		joined.set(name, { ...one, amounts: { [quantity]: sofar + one.amounts[quantity]! } });
	}
	return tableOfHoldings({
		areas: [...areas, { areaKey: ELSEWHERE, parentKey: REGION }],
		cropKeys: [...new Set(there.map(({ cropKey }) => cropKey))],
		quantities: [quantity],
		rules,
		holdings: [...joined.values()],
	});
}
