import type { Cut } from "./attack-program.ts";
import { Separator, type ShieldProblem, Unprotectable } from "./separator.ts";
import { LinearProgram, type Row, type Solver } from "./solver.ts";
import { solveZeroOne } from "./zero-one.ts";

export interface ExactLimits {
	/** How often cuts are sought for the relaxed program. */
	rounds: number;
	/** How often the 0/1 program is solved. */
	masters: number;
	/** Nodes of branch and bound in each of them. */
	nodes: number;
}

export const defaultLimits: ExactLimits = { rounds: 200, masters: 200, nodes: 20_000 };

export interface ExactResult {
	/** null: no choice in the scope protects every cell */
	shields: number[] | null;
	/** loss of the shields */
	loss: number;
	/** proven: no choice within the scope loses less */
	bound: number;
	linearPrograms: number;
	cuts: number;
	masters: number;
}

/**
 * Shields of least loss within a scope, with proof or with a bound. First the relaxed program, in which cells may be
 * withheld in part, is tightened by cuts until it violates none; then 0/1 programs are solved with ever more cuts until
 * their least choice protects every cell. A start prunes: cells whose reduced cost exceeds what the start loses beyond
 * the bound are left out.
 * @param loss by cell index
 * @param start shields known to protect, or null
 */
export function solveExactly(
	solver: Solver,
	problem: ShieldProblem,
	loss: readonly number[],
	start: readonly number[] | null,
	limits: ExactLimits = defaultLimits,
): ExactResult {
	const search = new Search(solver, problem, loss, start);
	try {
		search.relax(limits.rounds);
		search.branch(limits);
		return search.result();
	} catch (error) {
		if (!(error instanceof Unprotectable)) throw error;
		return { ...search.result(), shields: null, loss: Infinity, bound: Infinity };
	} finally {
		search.dispose();
	}
}

class Search {
	readonly #separator: Separator;
	readonly #costs: number[];
	readonly #rows: Row[] = [];
	readonly #relaxed: LinearProgram;
	readonly #closed = new Set<number>();
	#best: number[] | null = null;
	#loss = Infinity;
	#bound = 0;
	#masters = 0;

	constructor(
		readonly solver: Solver,
		readonly problem: ShieldProblem,
		loss: readonly number[],
		start: readonly number[] | null,
	) {
		this.#separator = new Separator(solver, problem);
		const { scope } = problem;
		this.#costs = scope.map((index, p) => (this.#separator.certain[p] ? 0 : loss[index]!));
		const columns = this.#costs.map((cost, p) => ({ cost, lower: 0, upper: this.#separator.certain[p] ? 0 : 1 }));
		this.#relaxed = new LinearProgram(solver, columns, [], "bounds");
		scope.forEach((_, p) => {
			if (this.#separator.certain[p]) this.#closed.add(p);
		});
		if (start) {
			const chosen = new Set(start);
			this.#keep(scope.flatMap((index, p) => (chosen.has(index) && !this.#closed.has(p) ? [p] : [])));
		}
	}

	/** Tightens the relaxed program until no cut is violated. */
	relax(rounds: number) {
		for (let round = 0; round < rounds; round++) {
			const outcome = this.#relaxed.solve();
			if (outcome.status === "infeasible" && this.#best) {
				// All that could have beaten the best is closed.
				this.#bound = this.#loss;
				return;
			}
			if (outcome.status !== "optimal") throw new Error(`the relaxed program ended ${outcome.status}`);
			this.#bound = Math.max(this.#bound, outcome.objective);
			if (this.#closeable(outcome)) return;
			const cuts = this.#separator.cuts(outcome.values, false);
			if (process.env.LOUD) console.log("round", round, outcome.objective, "loss", this.#loss, "cuts", cuts.length, "of", this.#rows.length, "closed", this.#closed.size, "LP", this.#separator.linearPrograms, "cpu", process.cpuUsage().user / 1e6);
			if (cuts.length === 0) return;
			this.#add(cuts);
		}
	}

	/** Solves 0/1 programs until the least choice protects every cell. */
	branch({ masters, nodes }: ExactLimits) {
		while (this.#masters < masters && !this.#isProven()) {
			const program = { costs: this.#costs, closed: this.#closed, rows: this.#rows };
			const outcome = solveZeroOne(this.solver, program, this.#best, nodes);
			this.#masters += 1;
			// Nothing that is left can beat the best.
			if (outcome.status === "infeasible") this.#bound = this.#loss;
			else this.#bound = Math.max(this.#bound, Math.min(this.#loss, outcome.bound));
			if (outcome.status === "infeasible" || !outcome.chosen) return;
			const withheld = new Float64Array(this.#costs.length);
			for (const p of outcome.chosen) withheld[p] = 1;
			const cuts = this.#separator.cuts(withheld, true);
			if (cuts.length === 0) this.#keep(outcome.chosen);
			else this.#add(cuts);
			if (cuts.length === 0 && outcome.status === "limited") return;
		}
	}

	result(): ExactResult {
		return {
			shields: this.#best?.map((p) => this.problem.scope[p]!) ?? null,
			loss: this.#loss,
			bound: this.#isProven() ? this.#loss : this.#bound,
			linearPrograms: this.#separator.linearPrograms,
			cuts: this.#rows.length,
			masters: this.#masters,
		};
	}

	dispose() {
		this.#separator.dispose();
		this.#relaxed.dispose();
	}

	#keep(chosen: number[]) {
		const loss = chosen.reduce((sum, p) => sum + this.#costs[p]!, 0);
		if (loss >= this.#loss) return;
		this.#best = chosen;
		this.#loss = loss;
	}

	#add(cuts: readonly Cut[]) {
		const rows = cuts.map(({ places, shares }) => ({ lower: 1, upper: Infinity, columns: places, factors: shares }));
		this.#rows.push(...rows);
		this.#relaxed.addRows(rows);
	}

	#isProven() {
		return this.#best !== null && this.#bound >= this.#loss - 1e-9 * (1 + this.#loss);
	}

	/** Leaves out cells that no better choice withholds; true when nothing better is left at all. */
	#closeable({ objective, reduced }: { objective: number; reduced: Float64Array }): boolean {
		if (!this.#best) return false;
		for (let p = 0; p < reduced.length; p++) {
			if (this.#closed.has(p) || objective + reduced[p]! < this.#loss - 1e-9 * (1 + this.#loss)) continue;
			this.#closed.add(p);
			this.#relaxed.setBounds(p, 0, 0);
		}
		return this.#isProven();
	}
}
