import { auditAttackers } from "./audit-owners.ts";
import { blocksOf, type Block } from "./audit-blocks.ts";
import type { OwnCell } from "./levels.ts";
import { LinearProgram, type Solver } from "./solver.ts";
import type { ProtectionTable, Quantity } from "./table.ts";

/** A withheld cell that can be worked out too closely. The key is for the desk; no value is told. */
export interface AuditFailure {
	cellKey: string;
	/** null: in every quantity */
	quantity: string | null;
	/** `solved`: known exactly; `narrow`: closer than its level; `by_owner`: too close for an owner who knows a part. */
	kind: "solved" | "narrow" | "by_owner";
}

/** What a reviewer may read: counts and relative widths, no withheld number. */
export interface AuditResult {
	passed: boolean;
	cells: number;
	withheld: number;
	withheldForOwnSake: number;
	shields: number;
	/**
	 * How much room the tightest own cell has, in multiples of what its level asks (1 = just enough), for an attacker who
	 * knows what is shown; null when no level is asked, or when nothing bounds them.
	 */
	narrowest: number | null;
	/** Intervals of own cells, one per cell and quantity with a level, by that multiple. */
	widths: { under1: number; from1to2: number; from2to5: number; from5: number };
	failures: AuditFailure[];
	linearPrograms: number;
}

/** Smallest and largest value that fit all that is shown. */
export type Interval = readonly [lower: number, upper: number];

/** What rounding may take from a level, as a share of it. */
const ROUNDING = 1e-6;

/**
 * Audits a pattern, whoever chose it: for each withheld cell and quantity, linear programs find the interval of values
 * that fit everything shown, additivity and no value below 0. Fails a cell withheld for its own sake whose interval
 * does not reach its level on both sides (below cut at 0), also for each owner who knows a cell alone; fails a shield
 * that can be solved in every quantity, as the word withheld would then be untrue.
 * Not covered: relations between quantities (harvested at most a normal crop), owners who know part of a shield
 * together with others, earlier releases.
 */
export function auditPattern(
	solver: Solver,
	table: ProtectionTable,
	own: readonly OwnCell[],
	shields: ReadonlySet<number>,
	options: { ownersAttack: boolean },
): AuditResult {
	const withheld = new Set([...own.map(({ index }) => index), ...shields]);
	const failures: AuditFailure[] = [];
	const rooms: number[] = [];
	const open = new Set<number>();
	let linearPrograms = 0;
	for (const quantity of table.quantities) {
		const blocks = blocksOf(table, quantity, withheld);
		const intervals = new Map(blocks.flatMap((block) => intervalsOf(solver, block)));
		linearPrograms += 2 * intervals.size;
		for (const [index, [lower, upper]] of intervals) if (upper > lower + 1e-9 * (1 + lower)) open.add(index);
		for (const cell of own) {
			const level = cell.levels[quantity.key]!;
			if (level === 0) continue;
			const value = table.cells[cell.index]!.quantities[quantity.key]!.total;
			const room = roomOf(intervals.get(cell.index)!, value, level);
			rooms.push(room);
			if (room < 1 - ROUNDING)
				failures.push(failure(table, cell.index, quantity, room < ROUNDING ? "solved" : "narrow"));
		}
		if (!options.ownersAttack) continue;
		for (const block of blocks) {
			const attacked = auditAttackers(solver, table, block, own, quantity.key);
			linearPrograms += attacked.linearPrograms;
			for (const index of attacked.failed) failures.push(failure(table, index, quantity, "by_owner"));
		}
	}
	for (const index of shields) if (!open.has(index)) failures.push(failure(table, index, null, "solved"));
	return {
		passed: failures.length === 0,
		cells: table.cells.length,
		withheld: withheld.size,
		withheldForOwnSake: own.length,
		shields: shields.size,
		...widthsOf(rooms),
		failures,
		linearPrograms,
	};
}

/** Each withheld cell's interval in one quantity, by cell key: what an attacker who knows all that is shown can say. */
export function feasibleIntervals(
	solver: Solver,
	table: ProtectionTable,
	quantity: Quantity,
	withheld: ReadonlySet<number>,
): Map<string, Interval> {
	const found = blocksOf(table, quantity, withheld).flatMap((block) => intervalsOf(solver, block));
	return new Map(found.map(([index, interval]) => [table.cells[index]!.key, interval]));
}

function intervalsOf(solver: Solver, block: Block): [number, Interval][] {
	const columns = block.values.map((value) => ({ cost: 0, lower: -value / block.scale, upper: Infinity }));
	const program = new LinearProgram(solver, columns, block.rows, "costs");
	const reach = (column: number, sign: 1 | -1) => {
		program.setCost(column, -sign);
		const outcome = program.solve();
		program.setCost(column, 0);
		// Standing still fits every row, so a program without an answer is a fault and not a finding.
		if (outcome.status === "infeasible") throw new Error("the audit's program does not hold the table itself");
		return outcome.status === "unbounded" ? sign * Infinity : outcome.values[column]! * block.scale;
	};
	try {
		return block.cells.map((index, column) => {
			const value = block.values[column]!;
			return [index, [Math.max(0, value + reach(column, -1)), value + reach(column, 1)]];
		});
	} finally {
		program.dispose();
	}
}

/** The lesser side's distance in multiples of what is asked of it. */
function roomOf([lower, upper]: Interval, value: number, level: number): number {
	const down = Math.min(level, value);
	return Math.min((upper - value) / level, down > 0 ? (value - lower) / down : Infinity);
}

function widthsOf(rooms: readonly number[]): Pick<AuditResult, "narrowest" | "widths"> {
	const least = rooms.reduce((a, b) => Math.min(a, b), Infinity);
	const count = (from: number, to: number) => rooms.filter((room) => room >= from && room < to).length;
	const just = 1 - ROUNDING;
	return {
		narrowest: Number.isFinite(least) ? least : null,
		widths: {
			under1: count(-Infinity, just),
			from1to2: count(just, 2),
			from2to5: count(2, 5),
			from5: rooms.filter((room) => room >= 5).length,
		},
	};
}

function failure(table: ProtectionTable, index: number, quantity: Quantity | null, kind: AuditFailure["kind"]) {
	return { cellKey: table.cells[index]!.key, quantity: quantity?.key ?? null, kind };
}
