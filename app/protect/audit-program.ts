import type { Highs, Model } from "highs";

/** lower <= sum of factor x column <= upper */
export interface AuditRow {
	lower: number;
	upper: number;
	columns: number[];
	factors: number[];
}

/** Lower and upper end and cost of a column. */
export type AuditColumn = [lower: number, upper: number, cost: number];

/** What a program's least cost is reached at; null where nothing bounds it. */
export type Answer = Float64Array | null;

/**
 * The audit's own linear program, apart from the chooser's, so that one fault cannot hide in both. Solved many times with
 * other costs and bounds, each run beginning where the last one ended.
 */
export class AuditProgram {
	readonly #model: Model;
	readonly #optimal: number;
	readonly #unbounded: number;
	runs = 0;

	constructor(solver: Highs, columns: readonly AuditColumn[], rows: readonly AuditRow[]) {
		const starts = [0];
		for (const row of rows) starts.push(starts.at(-1)! + row.columns.length);
		const { modelStatus } = solver.constants;
		this.#optimal = modelStatus.optimal;
		this.#unbounded = modelStatus.unbounded;
		this.#model = solver.createModel({
			numCols: columns.length,
			numRows: rows.length,
			colLower: columns.map(([lower]) => lower),
			colUpper: columns.map(([, upper]) => upper),
			colCost: columns.map(([, , cost]) => cost),
			rowLower: rows.map((row) => row.lower),
			rowUpper: rows.map((row) => row.upper),
			matrix: {
				format: "csr",
				numRows: rows.length,
				numCols: columns.length,
				starts,
				indices: rows.flatMap((row) => row.columns),
				values: rows.flatMap((row) => row.factors),
			},
		});
		// The primal simplex: the audit's point 0 fits every row, so each run has a place to begin at.
		this.#model.options.set({
			output_flag: false,
			presolve: "off",
			primal_feasibility_tolerance: 1e-9,
			simplex_strategy: 4,
		});
	}

	cost(column: number, cost: number) {
		this.#model.changeColCost(column, cost);
	}

	bound(column: number, lower: number, upper: number) {
		this.#model.changeColBounds(column, lower, upper);
	}

	/**
	 * @throws {Error} when there is neither an answer nor none to be had: what is not proven must not pass. As the table
	 *   itself fits all that is known of it, a program that nothing fits is a fault of its maker.
	 */
	solve(): Answer {
		this.#model.run();
		this.runs += 1;
		const status = this.#model.getModelStatus();
		if (status === this.#optimal) return this.#model.getSolution().colValue;
		if (status === this.#unbounded) return null;
		throw new Error(`the audit's program ended with solver status ${status}`);
	}

	/** Frees the solver's memory, which garbage collection does not reach. */
	dispose() {
		this.#model.dispose();
	}
}
