import { AuditProgram } from "./audit-program.ts";
import type { AuditBlock, Interval } from "./audit-system.ts";
import type { Solver } from "./solver.ts";

/** Keeps a search from moving unknowns that it need not move. */
const LEAST = 1e-6;
/** What rounding may take from a distance, as a share of it. */
const ROUNDING = 1e-6;

/** The interval of values that fit all that is known, by unknown: of every one, or of those that are wanted. */
export function intervalsOf(
	solver: Solver,
	block: AuditBlock,
	wanted?: ReadonlySet<number>,
): { intervals: Map<number, Interval>; runs: number } {
	if (block.rows.length === 0) return { intervals: freeIntervals(block), runs: 0 };
	const program = new AuditProgram(
		solver,
		block.ends.map(([lower, upper]) => [lower, upper, 0]),
		block.rows,
	);
	const reach = (column: number, side: 1 | -1) => {
		program.cost(column, -side);
		const answer = program.solve();
		program.cost(column, 0);
		return answer ? answer[column]! * block.scale : side * Infinity;
	};
	try {
		const intervals = block.unknowns.flatMap((unknown, column): [number, Interval][] => {
			if (wanted && !wanted.has(unknown)) return [];
			const value = block.values[column]!;
			const [floor] = block.ends[column]!;
			// Never below what everybody knows, whatever the solver's last digit says.
			const lower = Math.max(value + floor * block.scale, value + reach(column, -1));
			return [[unknown, [Math.min(value, lower), Math.max(value, value + reach(column, 1))]]];
		});
		return { intervals: new Map(intervals), runs: program.runs };
	} finally {
		program.dispose();
	}
}

/** What nothing ties to anything has all the room that everybody leaves it. */
function freeIntervals({ unknowns, values, ends, scale }: AuditBlock): Map<number, Interval> {
	return new Map(
		unknowns.map((unknown, column): [number, Interval] => {
			const [lower, upper] = ends[column]!;
			return [unknown, [values[column]! + lower * scale, values[column]! + upper * scale]];
		}),
	);
}

/** What an owner knows of a column: it is at least this much below the truth (0: the truth itself, on both sides). */
export type Hold = { column: number; below: number; exact: boolean };

/** Looks for points that fit all that is known, with one unknown at a wanted distance and an owner's knowledge held. */
export class PointSearch {
	readonly #program: AuditProgram;
	readonly #costs: number[];

	/** @param costs of moving a column, below the goal's gain of 1; the least where nothing is said */
	constructor(
		solver: Solver,
		readonly block: AuditBlock,
		costs: readonly number[] = [],
	) {
		this.#costs = block.ends.map((_, column) => Math.max(LEAST, costs[column] ?? 0));
		// Two columns an unknown, above and below the truth, as the search wants to know who moved at all.
		const columns = block.ends.flatMap(([lower, upper], column): [number, number, number][] => [
			[0, upper, this.#costs[column]!],
			[0, -lower, this.#costs[column]!],
		]);
		const rows = block.rows.map((row) => ({
			...row,
			columns: row.columns.flatMap((c) => [2 * c, 2 * c + 1]),
			factors: row.factors.flatMap((f) => [f, -f]),
		}));
		this.#program = new AuditProgram(solver, columns, rows);
	}

	get runs() {
		return this.#program.runs;
	}

	/** Distances of all columns, in units; null when the wanted one cannot be reached. */
	reach(column: number, distance: number, holds: readonly Hold[] = []): number[] | null {
		const { scale } = this.block;
		const wanted = Math.abs(distance) / scale;
		const goal = 2 * column + (distance > 0 ? 0 : 1);
		for (const hold of holds) this.#bound(hold.column, hold);
		const free = this.#ends(
			column,
			holds.find((hold) => hold.column === column),
		);
		this.#program.bound(goal, 0, Math.min(wanted, free[goal % 2]!));
		this.#program.bound(goal ^ 1, 0, 0);
		this.#program.cost(goal, -1);
		const answer = this.#program.solve();
		this.#program.cost(goal, this.#costs[column]!);
		for (const c of [column, ...holds.map((hold) => hold.column)]) this.#bound(c);
		if (!answer) throw new Error("the audit's search has no end");
		const at = (c: number) => answer[2 * c]! - answer[2 * c + 1]!;
		if (Math.abs(at(column)) < wanted * (1 - ROUNDING)) return null;
		return this.block.unknowns.map((_, c) => at(c) * scale);
	}

	/** From now on, moving it costs no more than what is withheld already. */
	cheapen(column: number) {
		this.#costs[column] = LEAST;
		for (const side of [0, 1]) this.#program.cost(2 * column + side, LEAST);
	}

	#ends(column: number, hold?: Hold): [above: number, below: number] {
		const [lower, upper] = this.block.ends[column]!;
		if (!hold) return [upper, -lower];
		return [hold.exact ? 0 : upper, Math.min(-lower, hold.below / this.block.scale)];
	}

	#bound(column: number, hold?: Hold) {
		this.#ends(column, hold).forEach((end, side) => this.#program.bound(2 * column + side, 0, end));
	}

	dispose() {
		this.#program.dispose();
	}
}
