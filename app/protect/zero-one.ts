import { modelOf, type Row, type Solver } from "./solver.ts";

/** A least-cost choice of columns (each 0 or 1) that fits all rows. */
export interface ZeroOneProgram {
	costs: readonly number[];
	/** columns that are not chosen in any better answer */
	closed: ReadonlySet<number>;
	rows: readonly Row[];
}

export type ZeroOneOutcome =
	| { status: "optimal"; chosen: number[]; bound: number }
	/** The node limit was met: a bound, and the best choice so far where there is one. */
	| { status: "limited"; chosen: number[] | null; bound: number }
	| { status: "infeasible" };

/**
 * Solves a 0/1 program by branch and bound (HiGHS). The limit is in nodes and not in seconds, so that the same program
 * always ends alike.
 * @param start a choice known to fit, to prune by.
 * @throws {Error} when the solver ends without an answer.
 */
export function solveZeroOne(
	solver: Solver,
	program: ZeroOneProgram,
	start: readonly number[] | null,
	mostNodes: number,
): ZeroOneOutcome {
	const { variableType, modelStatus } = solver.constants;
	const { costs, closed, rows } = program;
	const columns = costs.map((cost, column) => ({ cost, lower: 0, upper: closed.has(column) ? 0 : 1 }));
	const integrality = costs.map(() => variableType.integer);
	const model = solver.createModel({ ...modelOf(columns, rows), integrality });
	try {
		model.options.set({
			output_flag: false,
			mip_rel_gap: 0,
			mip_abs_gap: 1e-9,
			mip_feasibility_tolerance: 1e-9,
			mip_max_nodes: mostNodes,
			random_seed: 0,
		});
		if (start) {
			const colValue = new Float64Array(costs.length);
			for (const column of start) colValue[column] = 1;
			model.setSolution({ colValue });
		}
		model.run();
		const status = model.getModelStatus();
		if (status === modelStatus.infeasible) return { status: "infeasible" };
		const bound = Number(model.info.get("mip_dual_bound"));
		const values = model.getSolution().colValue;
		const found = Number(model.info.get("primal_solution_status")) === solver.constants.solutionStatus.feasible;
		const chosen = found ? [...values.keys()].filter((column) => values[column]! > 0.5) : null;
		if (status === modelStatus.optimal && chosen) return { status: "optimal", chosen, bound };
		if (status === modelStatus.solutionLimit) return { status: "limited", chosen, bound };
		throw new Error(`the 0/1 program ended with solver status ${status}`);
	} finally {
		model.dispose();
	}
}
