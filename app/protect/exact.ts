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
	watch: Watch = () => {},
): ExactResult {
	const search = new Search(solver, new Separator(solver, problem, limits.linearPrograms), loss, start);
	try {
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
		start: readonly number[] | null,
	) {
		const { scope } = separator.problem;
		this.#costs = scope.map((index, p) => (this.separator.certain[p] ? 0 : loss[index]!));
		const columns = this.#costs.map((cost, p) => ({ cost, lower: 0, upper: this.separator.certain[p] ? 0 : 1 }));
		this.#relaxed = new LinearProgram(solver, columns, [], "bounds");
		scope.forEach((_, p) => {
			if (this.separator.certain[p]) this.#closed.add(p);
		});
		if (start) {
			const chosen = new Set(start);
			this.#keep(scope.flatMap((index, p) => (chosen.has(index) && !this.#closed.has(p) ? [p] : [])));
		}
	}

	/** Tightens the relaxed program until no cut is violated. */
	relax(rounds: number, watch: Watch) {
		for (let round = 0; round < rounds; round++) {
			const outcome = this.#relaxed.solve();
			if (outcome.status === "infeasible" && this.#best) {
				// All that could have beaten the best is closed.
				this.#bound = this.#loss;
				return;
			}
			if (outcome.status !== "optimal") throw new Error(`the relaxed program ended ${outcome.status}`);
			this.#bound = Math.max(this.#bound, outcome.objective);
			watch(this.#loss, Math.min(this.#loss, this.#bound));
			if (this.#closeable(outcome)) return;
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
			const withheld = new Float64Array(this.#costs.length);
			for (const p of outcome.chosen) withheld[p] = 1;
			const cuts = this.separator.cuts(withheld, true);
			const faults = cuts.length === 0 ? this.#addFaults(outcome.chosen) : 0;
			if (cuts.length > 0) this.#add(cuts);
			else if (faults === 0) this.#keep(outcome.chosen);
			watch(this.#loss, Math.min(this.#loss, this.#bound));
			if (faults === 0 && cuts.length === 0 && outcome.status === "limited") return;
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

	#add(cuts: readonly Cut[]) {
		const rows = cuts.map(({ places, shares }) => ({ lower: 1, upper: Infinity, columns: places, factors: shares }));
		this.#rows.push(...rows);
		this.#relaxed.addRows(rows);
	}

	/** Rules that no attacker states join the program as the patterns that break them come up. */
	#addFaults(chosen: readonly number[]): number {
		const { scope, certain, faults } = this.separator.problem;
		const place = new Map(scope.map((index, p) => [index, p]));
		const found = faults?.(new Set([...certain, ...chosen.map((p) => scope[p]!)])) ?? [];
		for (const { withhold, show } of found) {
			const open = (cells: readonly number[]) =>
				cells.flatMap((index) => (certain.has(index) ? [] : (place.get(index) ?? [])));
			const [on, off] = [open(withhold), open(show)];
			if (on.length + off.length === 0) throw new Unprotectable(show[0] ?? withhold[0]!);
			const factors = [...on.map(() => 1), ...off.map(() => -1)];
			const row = { lower: 1 - off.length, upper: Infinity, columns: [...on, ...off], factors };
			this.#rows.push(row);
			this.#relaxed.addRows([row]);
		}
		return found.length;
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
