import type { Attacker } from "./attackers.ts";
import type { Knowledge } from "./knowledge.ts";
import { LinearProgram, type Solver } from "./solver.ts";

/** One question: can this cell seem to lie `level` above or below its value to this attacker? */
export interface Question {
	/** position in the scope */
	place: number;
	direction: 1 | -1;
	/** above 0, in units of the quantity */
	level: number;
	attacker: Attacker;
}

/** A possible table, as distances from the truth in multiples of the question's level. */
export interface Witness {
	moved: number[];
	/** by what, beside `moved` */
	by: number[];
}

/** sum of share x withheld(place) >= 1, for every pattern that protects. */
export interface Cut {
	places: number[];
	shares: number[];
}

/** How far cells are withheld: 1 wholly, 0 not at all; between them in a relaxed program. */
export interface Openness {
	of: Float64Array;
	/** For a pattern of zeros and ones: what is withheld may then move without limit. */
	whole: boolean;
	/** What even a shown cell may move while a cut is sought, so that cuts rest on few cells. */
	shown: number;
}

const TINY = 1e-9;
/** A level counts as reached when no more than this share of it is missing; the audit grants ten times as much. */
const REACHED = 1 - 1e-7;

/**
 * The attacker's linear program over the cells of a scope, in one quantity: the farthest that a cell can lie from its
 * value in a table that fits all that the attacker knows. Where the level is not reached, the program's dual gives a
 * cut: a sum of withheld cells that every protecting pattern must reach. In a relaxed program a cell moves by at most its
 * share of one level; the cut then counts what it may move in truth, so it holds whatever was assumed. The model is that
 * of Fischetti and Salazar for cell suppression (named from memory, see the reference's sources).
 */
export class AttackProgram {
	runs = 0;
	readonly #program: LinearProgram;
	readonly #lower: Float64Array;
	readonly #upper: Float64Array;

	constructor(
		solver: Solver,
		readonly knowledge: Knowledge,
	) {
		this.#lower = new Float64Array(knowledge.size);
		this.#upper = new Float64Array(knowledge.size);
		const columns = Array.from({ length: knowledge.size }, () => ({ cost: 0, lower: 0, upper: 0 }));
		this.#program = new LinearProgram(solver, columns, knowledge.rows, "bounds");
	}

	/** A witness where the level is reached, else a cut (null when no withheld cell can help). */
	ask(question: Question, open: Openness): { witness: Witness } | { cut: Cut | null } {
		const { place, direction } = question;
		this.knowledge.bound(question, open, this.#lower, this.#upper);
		this.#program.setAllBounds(this.#lower, this.#upper);
		for (const r of this.knowledge.sided) this.#program.setRowBounds(r, ...this.knowledge.sides(question, r));
		this.#program.setCost(place, -direction);
		const outcome = this.#program.solve();
		this.runs += 1;
		this.#program.setCost(place, 0);
		if (outcome.status !== "optimal") throw new Error(`the attacker's program ended ${outcome.status}`);
		const { values } = outcome;
		if (direction * values[place]! >= REACHED) {
			const moved = [...values.keys()].filter((p) => Math.abs(values[p]!) > 1e-8);
			return { witness: { moved, by: moved.map((p) => values[p]!) } };
		}
		return { cut: this.#cut(question, outcome.rowDuals) };
	}

	/**
	 * For any row duals u: direction x y(place) = (cost - u A) y + u A y, each term at most what its bounds allow. With the
	 * bounds that withheld cells truly have, the sum must be able to reach 1.
	 */
	#cut(question: Question, rowDuals: Float64Array): Cut | null {
		const { rows, certain } = this.knowledge;
		const gain = new Float64Array(this.#lower.length);
		gain[question.place] = question.direction;
		let rest = 1;
		rows.forEach(({ columns, factors }, r) => {
			const dual = -rowDuals[r]!;
			if (Math.abs(dual) < TINY) return;
			columns.forEach((p, i) => (gain[p]! -= dual * factors[i]!));
			const [lower, upper] = this.knowledge.sides(question, r);
			rest -= dual > 0 ? dual * upper : dual * lower;
		});
		const known = this.knowledge.placesOf(question.attacker);
		const places: number[] = [];
		const most: number[] = [];
		for (let p = 0; p < gain.length; p++) {
			if (Math.abs(gain[p]!) < TINY || known.has(p)) continue;
			const [below, above] = this.knowledge.ends(question, p);
			const reach = gain[p]! > 0 ? gain[p]! * above : -gain[p]! * below;
			if (certain[p]) rest -= reach;
			else if (reach > 0) {
				places.push(p);
				most.push(reach);
			}
		}
		// Nothing to be reached: the solver's answer was too rough to tell.
		if (!(rest > 1e-7)) throw new Error("the attacker's program gave a dual that proves nothing");
		return places.length === 0 ? null : { places, shares: most.map((reach) => Math.min(1, reach / rest)) };
	}

	dispose() {
		this.#program.dispose();
	}
}

export function isViolated({ places, shares }: Cut, withheld: Float64Array): boolean {
	return places.reduce((sum, p, i) => sum + shares[i]! * withheld[p]!, 0) < 1 - 1e-5;
}
