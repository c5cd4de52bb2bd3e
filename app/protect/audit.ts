import { type KnownPart, type Target, tryOwners } from "./audit-owners.ts";
import { intervalsOf } from "./audit-search.ts";
import { blocksOf, type Interval, linesOf, relationsOf, type Unknown } from "./audit-system.ts";
import { type Room, roomOf, ROUNDING, type Widths, widthsOf } from "./audit-widths.ts";
import type { OwnCell } from "./levels.ts";
import { guardedSums, type LineSum } from "./lines.ts";
import { partsOf } from "./parts.ts";
import type { ProtectionRules } from "./rules.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable, Quantity } from "./table.ts";
import { isTold, publicEnds, type Told } from "./told.ts";

export type { Interval } from "./audit-system.ts";

/**
 * Who is tried: `everybody` knows what is shown; an `owner` also the own answers; those of one `line` are taken together, as
 * their sum is known; `revision` is who kept an earlier release and subtracts, `other_survey` who kept another survey's.
 */
export type AttackerKind = "everybody" | "owner" | "line" | "revision" | "other_survey";

/** A withheld cell that can be worked out too closely. The key is for the desk; no value is told. */
export interface AuditFailure {
	cellKey: string;
	/** null: in every quantity */
	quantity: string | null;
	/**
	 * `solved`: known exactly; `narrow`: closer than its level; `by_owner`: too close for an owner who knows a part; `in_line`:
	 * of it and others of its line the sum is found too closely; `by_revision`: by subtracting an earlier release;
	 * `by_other_survey`: by another survey's release beside this one, whichever of the two withholds it.
	 */
	kind: "solved" | "narrow" | "by_owner" | "in_line" | "by_revision" | "by_other_survey";
	/** Whether it stands with everything withheld: other releases cause it, or what anybody sees. */
	beyondHelp?: boolean;
}

/** What a reviewer may read: counts and relative widths, no withheld number. */
export interface AuditResult extends Widths {
	passed: boolean;
	cells: number;
	withheld: number;
	withheldForOwnSake: number;
	shields: number;
	/** The same widths for each quantity. */
	byQuantity: ({ quantity: string } & Widths)[];
	/** How many times each kind of attacker was tried, and how many cells they found too closely. */
	attackers: { kind: AttackerKind; tried: number; failed: number }[];
	failures: AuditFailure[];
	linearPrograms: number;
	/** Cells of which other surveys of the season tell the value, or leave less room than is asked. */
	knownElsewhere?: number;
	/** Owners who find a cell too closely, to be named to the chooser and to nobody else. */
	objectors: string[];
}

export interface AuditOptions {
	/** Whether owners use what they know, alone and together in a line. */
	ownersAttack: boolean;
	/** Needed where owners attack: what a line's sum must meet. */
	rules?: ProtectionRules;
	/** What is known from outside this release. */
	told?: Told;
}

/**
 * Audits a pattern, whoever chose it: for each withheld cell and quantity, linear programs find the interval of values that
 * fit everything known, additivity and no value below 0. Fails a cell withheld for its own sake whose interval does not
 * reach its level on both sides (below cut at 0), for the public and for each owner who knows a part of anything; the
 * sum of cells of a line that are together too few; and a shield that can be solved in every quantity, as the word withheld would
 * then be untrue. What other releases tell counts as known; a cell that they tell has nothing left to protect.
 * It shares no program with the chooser: lines are read off the coordinates, and programs are its own.
 * Not covered: relations between quantities (harvested at most a normal crop), owners of several lines who tell each other.
 */
export function auditPattern(
	solver: Solver,
	table: ProtectionTable,
	own: readonly OwnCell[],
	shields: ReadonlySet<number>,
	options: AuditOptions,
): AuditResult {
	const ownSet = new Set(own.map(({ index }) => index));
	const withheld = new Set([...ownSet, ...shields]);
	const { ownersAttack, rules, told } = options;
	const pattern: Pattern = {
		own,
		withheld,
		told,
		sums: ownersAttack && rules ? guardedSums(table, rules, ownSet, withheld) : [],
		parts: ownersAttack ? partsOf(table) : null,
	};
	const found = table.quantities.map((quantity) => auditQuantity(solver, table, quantity, pattern));
	const open = new Set(found.flatMap((one) => [...one.intervals].filter(([, i]) => isOpen(i)).map(([cell]) => cell)));
	const closed = [...shields].filter((cell) => !open.has(cell) && !table.quantities.some((q) => isTold(told, q, cell)));
	const failures = [
		...found.flatMap((one) => one.failures),
		...closed.map((cell) => failure(table, cell, null, "solved")),
	];
	const sum = (of: (one: QuantityFound) => number) => found.reduce((whole, one) => whole + of(one), 0);
	const failed = (...kinds: AuditFailure["kind"][]) => failures.filter(({ kind }) => kinds.includes(kind)).length;
	return {
		passed: failures.length === 0,
		cells: table.cells.length,
		withheld: withheld.size,
		withheldForOwnSake: own.length,
		shields: shields.size,
		...widthsOf(found.flatMap(({ rooms }) => rooms)),
		byQuantity: found.map(({ quantity, rooms }) => ({ quantity, ...widthsOf(rooms) })),
		attackers: [
			{ kind: "everybody", tried: sum(({ intervals }) => intervals.size), failed: failed("solved", "narrow") },
			{ kind: "owner", tried: sum(({ tried }) => tried), failed: failed("by_owner") },
			{ kind: "line", tried: sum(({ sums }) => sums), failed: failed("in_line") },
		],
		failures,
		linearPrograms: sum(({ runs }) => runs),
		objectors: [...new Set(found.flatMap(({ objectors }) => objectors))],
	};
}

interface Pattern {
	own: readonly OwnCell[];
	withheld: ReadonlySet<number>;
	told: Told | undefined;
	sums: readonly LineSum[];
	/** null where owners do not attack */
	parts: ReturnType<typeof partsOf> | null;
}

interface QuantityFound {
	quantity: string;
	intervals: Map<number, Interval>;
	rooms: Room[];
	failures: AuditFailure[];
	objectors: string[];
	/** Tries of owners, and sums of lines. */
	tried: number;
	sums: number;
	runs: number;
}

function auditQuantity(solver: Solver, table: ProtectionTable, quantity: Quantity, pattern: Pattern): QuantityFound {
	const system = systemOf(table, quantity, pattern);
	const blocks = blocksOf(system.unknowns, system.relations);
	const searched = blocks.map((block) => intervalsOf(solver, block));
	const intervals = new Map(searched.flatMap((one) => [...one.intervals]));
	const targets = pattern.own.flatMap((cell): Target[] => {
		const unknown = system.place.get(cell.index);
		return unknown === undefined ? [] : target(unknown, cell.levels[quantity.key]!, system.unknowns);
	});
	const roomIn = (one: Target) => roomOf(intervals.get(one.unknown)!, { ...one, ...system.unknowns[one.unknown]! });
	const cellOf = ({ unknown }: Target) => system.cells[unknown]!;
	const failures = targets.flatMap((one) => {
		const room = roomIn(one);
		return room < 1 - ROUNDING ? [failure(table, cellOf(one), quantity, room < ROUNDING ? "solved" : "narrow")] : [];
	});
	const narrowSums = system.sums.filter((one) => roomIn(one) < 1 - ROUNDING);
	const inLine = new Set(narrowSums.flatMap(({ cells }) => cells));
	const known = pattern.parts && knownParts(table, quantity, system.cells, pattern.parts);
	const owners = known ? blocks.map((block) => tryOwners(solver, block, targets, known)) : [];
	const byOwner = owners.flatMap(({ failed }) => failed);
	return {
		quantity: quantity.key,
		intervals: new Map([...intervals].flatMap(([u, i]) => (u < system.cells.length ? [[system.cells[u]!, i]] : []))),
		rooms: targets.map(roomIn),
		failures: [
			...failures,
			...byOwner.map((unknown) => failure(table, system.cells[unknown]!, quantity, "by_owner")),
			...[...inLine].map((cell) => failure(table, cell, quantity, "in_line")),
		],
		objectors: owners.flatMap(({ objectors }) => objectors),
		tried: owners.reduce((sum, one) => sum + one.tried, 0),
		sums: system.sums.length,
		runs: [...searched, ...owners].reduce((sum, one) => sum + one.runs, 0),
	};
}

function target(unknown: number, level: number, unknowns: readonly Unknown[]): Target[] {
	return level === 0 ? [] : [{ unknown, up: level, down: Math.min(level, unknowns[unknown]!.value) }];
}

/** The withheld cells of one quantity whose values are not known, the guarded sums of them, and what is known of both. */
function systemOf(
	table: ProtectionTable,
	quantity: Quantity,
	{ withheld, told, sums }: Omit<Pattern, "own" | "parts">,
) {
	// A cell without owners is a published zero.
	const cells = [...withheld]
		.filter((cell) => table.cells[cell]!.owners > 0 && !isTold(told, quantity, cell))
		.toSorted((a, b) => a - b);
	const place = new Map(cells.map((cell, unknown) => [cell, unknown]));
	const unknowns = cells.map((cell): Unknown => {
		const value = table.cells[cell]!.quantities[quantity.key]!.total;
		return { value, ...publicEnds(value, quantity, told) };
	});
	const relations = relationsOf(table, linesOf(table), quantity, (cell) => place.get(cell));
	const guarded = sums.flatMap((line) => {
		const level = line.levels[quantity.key] ?? 0;
		const parts = line.cells.flatMap((cell) => place.get(cell) ?? []);
		// One cell left is no sum, and what is told has nothing left to protect.
		if (level === 0 || parts.length < 2) return [];
		const value = parts.reduce((whole, part) => whole + unknowns[part]!.value, 0);
		const unknown = unknowns.push({ value, lower: 0, upper: Infinity }) - 1;
		relations.push({ unknowns: [...parts, unknown], factors: [...parts.map(() => 1), -1], lower: 0, upper: 0 });
		return target(unknown, level, unknowns).map((one) => ({ ...one, cells: line.cells }));
	});
	return { cells, place, unknowns, relations, sums: guarded };
}

/** What each owner knows of an unknown in one quantity, the largest part first. */
function knownParts(
	table: ProtectionTable,
	quantity: Quantity,
	cells: readonly number[],
	parts: ReturnType<typeof partsOf>,
) {
	const q = table.quantities.indexOf(quantity);
	return (unknown: number): KnownPart[] => {
		const cell = cells[unknown];
		if (cell === undefined) return []; // a sum: what is known of its cells says all
		const alone = table.cells[cell]!.owners === 1;
		return parts(cell)
			.map(({ owner, amounts }) => ({ owner, amount: amounts[q]!, alone }))
			.toSorted((a, b) => b.amount - a.amount);
	};
}

/**
 * Each withheld cell's interval in one quantity, by cell key: what an attacker who knows all that is shown can say. What is
 * told has none.
 */
export function feasibleIntervals(
	solver: Solver,
	table: ProtectionTable,
	quantity: Quantity,
	withheld: ReadonlySet<number>,
	told?: Told,
): Map<string, Interval> {
	const { cells, unknowns, relations } = systemOf(table, quantity, { withheld, told, sums: [] });
	const found = blocksOf(unknowns, relations).flatMap((block) => [...intervalsOf(solver, block).intervals]);
	return new Map(found.map(([unknown, interval]) => [table.cells[cells[unknown]!]!.key, interval]));
}

function isOpen([lower, upper]: Interval): boolean {
	return upper > lower + 1e-9 * (1 + Math.abs(lower));
}

function failure(
	table: ProtectionTable,
	cell: number,
	quantity: Quantity | null,
	kind: AuditFailure["kind"],
): AuditFailure {
	return { cellKey: table.cells[cell]!.key, quantity: quantity?.key ?? null, kind };
}
