import { groupBy } from "#app/lib/group-by.ts";
import { type KnownPart, type Target, tryOwners } from "./audit-owners.ts";
import { blocksOf, linesOf, type Relation, relationsOf, type Unknown } from "./audit-system.ts";
import type { OwnCell } from "./levels.ts";
import type { partsOf } from "./parts.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";

/** One release, or the draft, as whoever keeps them all has it before them. */
export interface AuditEdition {
	table: ProtectionTable;
	/** Keys of the cells shown with figures. */
	shown: ReadonlySet<string>;
	/** Cells withheld for their own sake, unless they are shown all the same. */
	own: readonly OwnCell[];
	parts: ReturnType<typeof partsOf>;
}

/** A difference between two editions that must not be found out, in one cell. */
export interface GuardedDifference {
	cellKey: string;
	earlier: number;
	later: number;
	level: number;
	owners: readonly string[];
}

/** What is known of one quantity in several releases together. */
export interface EditionsProgram {
	quantity: string;
	/** The draft last. */
	editions: readonly AuditEdition[];
	/**
	 * For each edition and cell the first edition from which its value can be had, itself where from none: whoever knows one
	 * of them knows the other.
	 */
	sameAs: (edition: number, cellKey: string) => number;
	differences: readonly GuardedDifference[];
	/** Whether owners are tried too. */
	owners: boolean;
	/** Cells, as `edition cellKey`, that need not be looked for. */
	spared?: ReadonlySet<string>;
}

/** The key of a cell that is named as `edition cellKey`. */
export const cellOf = (name: string) => name.slice(name.indexOf(" ") + 1);

export interface EditionsFound {
	/** Cells that come out closer than they may, of the draft or of an edition before it, as `edition cellKey`. */
	failed: string[];
	/** Cells that were looked for and not found. */
	safe: string[];
	tried: number;
	runs: number;
}

/**
 * Tries to find withheld cells of any edition, and guarded differences between them, from all that is shown in all of
 * them: one program holds the tables of every edition, in which values that follow from each other are one unknown. Each
 * owner is tried too, with the own answers of every edition. A cell of the draft that an earlier one tells has nothing left
 * to protect; one of an earlier edition that the draft tells is found.
 */
export function findBesideEditions(solver: Solver, program: EditionsProgram): EditionsFound {
	const { editions, differences, spared } = program;
	const last = editions.length - 1;
	const { value, position } = readerOf(program);
	const { unknowns, unknownOf, sources } = unknownsOf(program);
	const relations: Relation[] = editions.flatMap(({ table }, e) => {
		const quantity = table.quantities.find(({ key }) => key === program.quantity)!;
		return relationsOf(table, linesOf(table), quantity, (cell) => unknownOf(e, cell));
	});
	const targets: (Target & { name: string })[] = [];
	const failed: string[] = [];
	editions.forEach(({ table, own, shown }, e) => {
		for (const { index, levels } of own) {
			const { key: cellKey } = table.cells[index]!;
			const level = levels[program.quantity] ?? 0;
			const unknown = unknownOf(e, index);
			const name = `${e} ${cellKey}`;
			if (level === 0 || shown.has(cellKey) || spared?.has(name)) continue;
			const down = Math.min(level, value(e, index));
			if (unknown !== undefined) targets.push({ name, unknown, up: level, down });
			else if (e < last) failed.push(name);
		}
	});
	const changers = new Map<number, KnownPart[]>();
	for (const { cellKey, earlier, later, level, owners } of differences) {
		const [was, is] = [position(earlier, cellKey)!, position(later, cellKey)!];
		const [before, after] = [unknownOf(earlier, was), unknownOf(later, is)];
		const name = `${later} ${cellKey}`;
		if (before === undefined && after === undefined) {
			failed.push(name);
			continue;
		}
		const difference = value(later, is) - value(earlier, was);
		const unknown = unknowns.push({ value: difference, lower: -Infinity, upper: Infinity }) - 1;
		const terms = [
			[unknown, -1] as const,
			...(after === undefined ? [] : [[after, 1] as const]),
			...(before === undefined ? [] : [[before, -1] as const]),
		];
		relations.push({ unknowns: terms.map(([u]) => u), factors: terms.map(([, f]) => f), lower: 0, upper: 0 });
		targets.push({ name, unknown, up: level, down: level });
		// Who changed an answer knows that much of the difference; who alone did knows all of it.
		const alone = owners.length === 1;
		changers.set(
			unknown,
			owners.map((owner) => ({ owner, amount: alone ? difference : -Infinity, alone })),
		);
	}
	const q = editions.map(({ table }) => table.quantities.findIndex(({ key }) => key === program.quantity));
	const known = (unknown: number) => {
		if (!program.owners) return [];
		return changers.get(unknown) ?? partsIn(editions, q, sources[unknown]!, unknowns[unknown]!.value, value);
	};
	const targetsOf = groupBy(targets, ({ unknown }) => unknown);
	const found = blocksOf(unknowns, relations).map((block) => tryOwners(solver, block, targets, known));
	const closely = new Set(found.flatMap(({ narrow, failed: byOwner }) => [...narrow, ...byOwner]));
	for (const unknown of closely) failed.push(...targetsOf.get(unknown)!.map(({ name }) => name));
	return {
		failed: [...new Set(failed)],
		safe: targets.flatMap(({ name, unknown }) => (closely.has(unknown) ? [] : [name])),
		tried: targets.length,
		runs: found.reduce((sum, { runs }) => sum + runs, 0),
	};
}

function readerOf({ editions, quantity }: EditionsProgram) {
	const positions = editions.map(({ table }) => new Map(table.cells.map(({ key }, cell) => [key, cell])));
	return {
		value: (edition: number, cell: number) => editions[edition]!.table.cells[cell]!.quantities[quantity]!.total,
		position: (edition: number, cellKey: string) => positions[edition]!.get(cellKey),
	};
}

type Source = readonly [edition: number, cell: number];

/** One unknown for each cell and the editions whose values follow from each other, unless one of these shows it. */
function unknownsOf(program: EditionsProgram) {
	const { editions, sameAs } = program;
	const { value } = readerOf(program);
	const groups = new Map<string, Source[]>();
	editions.forEach(({ table }, e) => {
		table.cells.forEach(({ key }, cell) => {
			const group = `${sameAs(e, key)} ${key}`;
			groups.set(group, [...(groups.get(group) ?? []), [e, cell]]);
		});
	});
	const unknowns: Unknown[] = [];
	const sources: Source[][] = [];
	const places = editions.map(() => new Map<number, number>());
	for (const group of groups.values()) {
		const told = group.some(([e, cell]) => {
			const { key, owners } = editions[e]!.table.cells[cell]!;
			return owners === 0 || editions[e]!.shown.has(key);
		});
		if (told) continue;
		// None of them is negative, so the least has the least room below.
		const least = Math.min(...group.map(([e, cell]) => value(e, cell)));
		const place = unknowns.push({ value: least, lower: 0, upper: Infinity }) - 1;
		sources.push(group);
		for (const [e, cell] of group) places[e]!.set(cell, place);
	}
	return { unknowns, sources, unknownOf: (edition: number, cell: number) => places[edition]!.get(cell) };
}

/** What each owner knows of an unknown, from the own answers in any of its editions, the largest part first. */
function partsIn(
	editions: readonly AuditEdition[],
	q: readonly number[],
	group: readonly Source[],
	least: number,
	value: (edition: number, cell: number) => number,
): KnownPart[] {
	const known = new Map<string, KnownPart>();
	for (const [e, cell] of group) {
		const { table, parts } = editions[e]!;
		const alone = table.cells[cell]!.owners === 1;
		for (const { owner, amounts } of parts(cell)) {
			// As a part of the least of them: the others lie above it by what is known.
			const amount = amounts[q[e]!]! - (value(e, cell) - least);
			const sofar = known.get(owner);
			known.set(owner, {
				owner,
				amount: Math.max(amount, sofar?.amount ?? -Infinity),
				alone: alone || (sofar?.alone ?? false),
			});
		}
	}
	return [...known.values()].toSorted((a, b) => b.amount - a.amount);
}
