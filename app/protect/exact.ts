import type { Cut } from "./attack-program.ts";
import { OutOfWork, Separator, type ShieldProblem, Unprotectable } from "./separator.ts";
import { LinearProgram, type Row, type Solver } from "./solver.ts";
import { solveZeroOne } from "./zero-one.ts";

export interface ExactLimits {
	/** How often cuts are sought for the relaxed program. */
	rounds: number;
	/** How often the 0/1 program is solved. */
	masters: number;
	/** Nodes of branch and bound in each of them. */
	nodes: number;
	/** Linear programs of attackers in all: about a millisecond each. */
	linearPrograms: number;
}

/** Counts and not seconds, so that the same table always gets the same shields. */
export const defaultLimits: ExactLimits = { rounds: 200, masters: 100, nodes: 20_000, linearPrograms: 60_000 };

/** Tells how far a search is: the best loss so far (Infinity: none) and the bound. */
export type Watch = (best: number, bound: number) => void;

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
 * their least choice protects every cell.
 * @param loss by cell index
 */
export function solveExactly(
	solver: Solver,
	problem: ShieldProblem,
	loss: readonly number[],
	limits: ExactLimits = defaultLimits,
	watch: Watch = () => {},
): ExactResult {
	const search = new Search(solver, new Separator(solver, problem, limits.linearPrograms), loss);
	try {
		search.begin();
		search.relax(limits.rounds, watch);
		search.branch(limits, watch);
		return search.result();
	} catch (error) {
		if (error instanceof OutOfWork) return search.result();
		if (!(error instanceof Unprotectable)) throw error;
		return { ...search.result(), shields: null, loss: Infinity, bound: Infinity };
	} finally {
		search.dispose();
	}
}

class Search {
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
		readonly separator: Separator,
		loss: readonly number[],
	) {
		const { scope } = separator.problem;
		this.#costs = scope.map((index, p) => (this.separator.certain[p] ? 0 : loss[index]!));
		const columns = this.#costs.map((cost, p) => ({ cost, lower: 0, upper: this.separator.certain[p] ? 0 : 1 }));
		this.#relaxed = new LinearProgram(solver, columns, [], "bounds");
		scope.forEach((_, p) => {
			if (this.separator.certain[p]) this.#closed.add(p);
		});
	}

	/** Sums of own cells alone are seen to at once. */
	begin() {
		this.#addRows(this.separator.lineCuts(new Float64Array(this.#costs.length)));
	}

	/** Tightens the relaxed program until no cut is violated. */
	relax(rounds: number, watch: Watch) {
		for (let round = 0; round < rounds; round++) {
			const outcome = this.#relaxed.solve();
			if (outcome.status === "infeasible") throw new Unprotectable();
			if (outcome.status !== "optimal") throw new Error(`the relaxed program ended ${outcome.status}`);
			this.#bound = Math.max(this.#bound, outcome.objective);
			watch(this.#loss, Math.min(this.#loss, this.#bound));
			const cuts = this.separator.cuts(outcome.values, false);
			if (cuts.length === 0) return;
			this.#add(cuts);
		}
	}

	/** Solves 0/1 programs until the least choice protects every cell. */
	branch({ masters, nodes }: ExactLimits, watch: Watch) {
		while (this.#masters < masters && !this.#isProven()) {
			const program = { costs: this.#costs, closed: this.#closed, rows: this.#rows };
			const outcome = solveZeroOne(this.solver, program, this.#best, nodes);
			this.#masters += 1;
			// Nothing that is left can beat the best.
			if (outcome.status === "infeasible") this.#bound = this.#loss;
			else this.#bound = Math.max(this.#bound, Math.min(this.#loss, outcome.bound));
			if (outcome.status === "infeasible" || !outcome.chosen) return;
			const safe = this.#isSafe(outcome.chosen);
			if (safe) this.#keep(outcome.chosen);
			watch(this.#loss, Math.min(this.#loss, this.#bound));
			if (safe && outcome.status === "limited") return;
		}
	}

	result(): ExactResult {
		return {
			shields: this.#best?.map((p) => this.separator.problem.scope[p]!) ?? null,
			loss: this.#loss,
			bound: this.#isProven() ? this.#loss : this.#bound,
			linearPrograms: this.separator.linearPrograms,
			cuts: this.#rows.length,
			masters: this.#masters,
		};
	}

	dispose() {
		this.separator.dispose();
		this.#relaxed.dispose();
	}

	#keep(chosen: number[]) {
		const loss = chosen.reduce((sum, p) => sum + this.#costs[p]!, 0);
		if (loss >= this.#loss) return;
		this.#best = chosen;
		this.#loss = loss;
	}

	/** Whether these protect every cell and every sum; what they do not is cut off. */
	#isSafe(chosen: readonly number[]): boolean {
		const withheld = new Float64Array(this.#costs.length);
		for (const p of chosen) withheld[p] = 1;
		const lines = this.separator.lineCuts(withheld);
		this.#addRows(lines);
		const cuts = this.separator.cuts(withheld, true);
		this.#add(cuts);
		return lines.length === 0 && cuts.length === 0;
	}

	#add(cuts: readonly Cut[]) {
		this.#addRows(cuts.map(({ places, shares }) => ({ lower: 1, upper: Infinity, columns: places, factors: shares })));
	}

	#addRows(rows: readonly Row[]) {
		if (rows.some(({ columns }) => columns.length === 0)) throw new Unprotectable();
		this.#rows.push(...rows);
		this.#relaxed.addRows(rows);
	}

	#isProven() {
		return this.#best !== null && this.#bound >= this.#loss - 1e-9 * (1 + this.#loss);
	}
}
