import loadHighs, { type Highs, type Model } from "highs";

export type Solver = Highs;

let loading: Promise<Solver> | undefined;

/** The solver of linear and 0/1 programs, loaded once a thread (about 50 ms). Solving blocks the thread. */
export function loadSolver(): Promise<Solver> {
	loading ??= loadHighs();
	return loading;
}

export interface Column {
	cost: number;
	lower: number;
	upper: number;
}

export interface Row {
	lower: number;
	upper: number;
	columns: number[];
	factors: number[];
}

export type Outcome =
	| { status: "optimal"; values: Float64Array; reduced: Float64Array; rowDuals: Float64Array; objective: number }
	| { status: "infeasible" }
	| { status: "unbounded" };

const PRIMAL_SIMPLEX = 4;
const DUAL_SIMPLEX = 1;

/** A linear program that is solved many times with small changes; each run starts where the last one ended. */
export class LinearProgram {
	readonly #model: Model;
	readonly #status: Solver["constants"]["modelStatus"];

	/** @param changing what changes between runs, since the matching simplex then needs few steps (0.2 ms, not 1.5 ms). */
	constructor(solver: Solver, columns: readonly Column[], rows: readonly Row[], changing: "costs" | "bounds") {
		this.#status = solver.constants.modelStatus;
		this.#model = solver.createModel(modelOf(columns, rows));
		this.#model.options.set({
			output_flag: false,
			presolve: "off",
			primal_feasibility_tolerance: 1e-9,
			simplex_strategy: changing === "costs" ? PRIMAL_SIMPLEX : DUAL_SIMPLEX,
		});
	}

	setCost(column: number, cost: number) {
		this.#model.changeColCost(column, cost);
	}

	setBounds(column: number, lower: number, upper: number) {
		this.#model.changeColBounds(column, lower, upper);
	}

	/** Bounds of every column at once, which is much faster than one by one. */
	setAllBounds(lower: Float64Array, upper: Float64Array) {
		this.#model.changeColsBounds({ kind: "range", from: 0, to: lower.length - 1 }, lower, upper);
	}

	setRowBounds(row: number, lower: number, upper: number) {
		this.#model.changeRowBounds(row, lower, upper);
	}

	addRows(rows: readonly Row[]) {
		for (const row of rows) {
			this.#model.addRow(row.lower, row.upper, { indices: row.columns, values: row.factors });
		}
	}

	/**
	 * The minimum, with reduced costs (0 or more at a lower bound) and row duals as for a minimum.
	 * @throws {Error} when the solver ends in any other way than with an answer: what is not proven must not pass.
	 */
	solve(): Outcome {
		this.#model.run();
		const status = this.#model.getModelStatus();
		if (status === this.#status.optimal) {
			const { colValue, colDual, rowDual } = this.#model.getSolution();
			const objective = this.#model.getObjectiveValue();
			return { status: "optimal", values: colValue, reduced: colDual, rowDuals: rowDual, objective };
		}
		if (status === this.#status.infeasible) return { status: "infeasible" };
		if (status === this.#status.unbounded) return { status: "unbounded" };
		throw new Error(`the linear program ended with solver status ${status}`);
	}

	/** Frees the solver's memory, which garbage collection does not reach. */
	dispose() {
		this.#model.dispose();
	}
}

export function modelOf(columns: readonly Column[], rows: readonly Row[]) {
	const starts = [0];
	for (const row of rows) starts.push(starts.at(-1)! + row.columns.length);
	return {
		numCols: columns.length,
		numRows: rows.length,
		colCost: columns.map((c) => c.cost),
		colLower: columns.map((c) => c.lower),
		colUpper: columns.map((c) => c.upper),
		rowLower: rows.map((r) => r.lower),
		rowUpper: rows.map((r) => r.upper),
		matrix: {
			format: "csr" as const,
			numRows: rows.length,
			numCols: columns.length,
			starts,
			indices: rows.flatMap((r) => r.columns),
			values: rows.flatMap((r) => r.factors),
		},
	};
}
