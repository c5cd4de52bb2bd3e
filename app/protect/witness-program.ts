import type { Openness, Question, Witness } from "./attack-program.ts";
import type { Knowledge } from "./knowledge.ts";
import { LinearProgram, type Solver } from "./solver.ts";

const STILL = 1e-8;
/** What moving a cell costs that some attacker knows, any other costing 1: so that few attackers need be tried. */
const KNOWN_COST = 5;

/**
 * Finds possible tables that move little: one cell by its level, and only those others that must move with it. They
 * stay possible while patterns change, and few attackers know a cell that moves.
 */
export class WitnessProgram {
	runs = 0;
	readonly #program: LinearProgram;
	readonly #bounds: [Float64Array, Float64Array];
	readonly #columns: [Float64Array, Float64Array];

	/** @param known places that some attacker knows */
	constructor(
		solver: Solver,
		readonly knowledge: Knowledge,
		known: ReadonlySet<number>,
	) {
		const { size, rows } = knowledge;
		this.#bounds = [new Float64Array(size), new Float64Array(size)];
		this.#columns = [new Float64Array(2 * size), new Float64Array(2 * size)];
		// Two columns a cell, up and down, so that cost is by distance moved.
		const columns = Array.from({ length: 2 * size }, (_, c) => ({
			cost: known.has(c >> 1) ? KNOWN_COST : 1,
			lower: 0,
			upper: 0,
		}));
		const both = rows.map((row) => ({
			...row,
			columns: row.columns.flatMap((p) => [2 * p, 2 * p + 1]),
			factors: row.factors.flatMap((f) => [f, -f]),
		}));
		this.#program = new LinearProgram(solver, columns, both, "bounds");
	}

	/** null when the cell cannot be moved so far. */
	find(question: Question, open: Openness): Witness | null {
		const [lower, upper] = this.#bounds;
		const [from, to] = this.#columns;
		this.knowledge.bound(question, open, lower, upper);
		for (let p = 0; p < lower.length; p++) {
			to[2 * p] = upper[p]!;
			to[2 * p + 1] = -lower[p]!;
		}
		const goal = 2 * question.place + (question.direction > 0 ? 0 : 1);
		if (to[goal]! < 1) return null;
		from[goal] = to[goal] = 1;
		to[goal ^ 1] = 0;
		this.#program.setAllBounds(from, to);
		from[goal] = 0;
		for (const r of this.knowledge.sided) this.#program.setRowBounds(r, ...this.knowledge.sides(question, r));
		const outcome = this.#program.solve();
		this.runs += 1;
		if (outcome.status !== "optimal") return null;
		const { values } = outcome;
		const moved: number[] = [];
		const by: number[] = [];
		for (let p = 0; p < lower.length; p++) {
			const distance = values[2 * p]! - values[2 * p + 1]!;
			if (Math.abs(distance) <= STILL) continue;
			moved.push(p);
			by.push(distance);
		}
		return { moved, by };
	}

	dispose() {
		this.#program.dispose();
	}
}
