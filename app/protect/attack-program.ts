import type { Attacker } from "./attackers.ts";
import { relationsAmong } from "./relations.ts";
import { LinearProgram, type Row, type Solver } from "./solver.ts";
import type { ProtectionTable, Quantity } from "./table.ts";

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
 * value in a table that fits all that the attacker knows. Cells outside the scope stand still. Where the level is not
 * reached, the program's dual gives a cut: a sum of withheld cells that every protecting pattern must reach.
 * In a relaxed program a cell moves by at most its share of one level; the cut then counts what it may move in truth,
 * so it holds whatever was assumed. The model is that of Fischetti and Salazar for cell suppression (named from memory,
 * see the reference's sources).
 */
export class AttackProgram {
	runs = 0;
	readonly #program: LinearProgram;
	readonly #rows: Row[] = [];
	/** rows with an end other than 0, to be scaled by the level */
	readonly #sided: number[] = [];
	readonly #told = new Map<Attacker, Set<number>>();
	readonly #values: Float64Array;
	readonly #lower: Float64Array;
	readonly #upper: Float64Array;
	readonly #place: ReadonlyMap<number, number>;

	constructor(
		solver: Solver,
		table: ProtectionTable,
		readonly quantity: Quantity,
		scope: readonly number[],
		readonly certain: Uint8Array,
		attackers: readonly Attacker[],
	) {
		this.#place = new Map(scope.map((index, place) => [index, place]));
		this.#values = Float64Array.from(scope, (index) => table.cells[index]!.quantities[quantity.key]!.total);
		this.#lower = new Float64Array(scope.length);
		this.#upper = new Float64Array(scope.length);
		for (const { cells, factors, lower, upper } of relationsAmong(table, quantity, this.#place)) {
			this.#rows.push({ columns: cells.map((index) => this.#place.get(index)!), factors, lower, upper });
		}
		for (const attacker of attackers) {
			const rows = (attacker.relations ?? []).filter((relation) => relation.quantity === quantity.key);
			if (rows.length > 0) this.#told.set(attacker, new Set(rows.map((_, r) => this.#rows.length + r)));
			for (const { cells, factors, lower, upper } of rows) {
				const truth = cells.reduce(
					(sum, index, i) => sum + factors[i]! * table.cells[index]!.quantities[quantity.key]!.total,
					0,
				);
				const inside = cells.flatMap((index, i) => {
					const place = this.#place.get(index);
					return place === undefined ? [] : [[place, factors[i]!] as const];
				});
				this.#rows.push({
					columns: inside.map(([place]) => place),
					factors: inside.map(([, factor]) => factor),
					lower: Math.min(0, lower - truth),
					upper: Math.max(0, upper - truth),
				});
			}
		}
		this.#rows.forEach(({ lower, upper }, r) => {
			if (lower !== 0 || upper !== 0 || [...this.#told.values()].some((rows) => rows.has(r))) this.#sided.push(r);
		});
		const columns = scope.map(() => ({ cost: 0, lower: 0, upper: 0 }));
		this.#program = new LinearProgram(solver, columns, this.#rows, "bounds");
	}

	/** A witness where the level is reached, else a cut (null when no withheld cell can help). */
	ask(question: Question, open: Openness): { witness: Witness } | { cut: Cut | null } {
		const { place, direction } = question;
		this.#setBounds(question, open);
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

	/** What this attacker can tell of a cell: how far below and above the truth it may lie, in levels. */
	ends({ attacker, level, place, direction }: Question, p: number): [below: number, above: number] {
		let below = this.#values[p]!;
		let above = Infinity;
		for (const bound of attacker.bounds ?? []) {
			if (bound.quantity !== this.quantity.key || this.#place.get(bound.cell) !== p) continue;
			below = Math.max(0, Math.min(below, this.#values[p]! - bound.lower));
			above = Math.max(0, Math.min(above, bound.upper - this.#values[p]!));
		}
		if (p === place && direction > 0) above = Math.min(above, level);
		if (p === place && direction < 0) below = Math.min(below, level);
		return [below / level, above / level];
	}

	#setBounds(question: Question, open: Openness) {
		const [lower, upper] = [this.#lower, this.#upper];
		for (let p = 0; p < lower.length; p++) {
			const share = this.certain[p] ? 1 : Math.max(open.of[p]!, open.shown);
			const [below, above] = share === 0 ? [0, 0] : this.ends(question, p);
			const free = this.certain[p] || (open.whole && share === 1);
			lower[p] = free ? -below : -Math.min(below, 1) * share;
			upper[p] = free ? above : Math.min(above, 1) * share;
		}
		for (const index of question.attacker.knows) {
			const p = this.#place.get(index);
			if (p !== undefined) lower[p] = upper[p] = 0;
		}
		this.#program.setAllBounds(lower, upper);
		for (const r of this.#sided) this.#program.setRowBounds(r, ...this.#sides(question, r));
	}

	#sides({ attacker, level }: Question, r: number): [number, number] {
		for (const [teller, rows] of this.#told) if (rows.has(r) && teller !== attacker) return [-Infinity, Infinity];
		const { lower, upper } = this.#rows[r]!;
		return [lower / level, upper / level];
	}

	/**
	 * For any row duals u: direction x y(place) = (cost - u A) y + u A y, each term at most what its bounds allow. With the
	 * bounds that withheld cells truly have, the sum must be able to reach 1.
	 */
	#cut(question: Question, rowDuals: Float64Array): Cut | null {
		const gain = new Float64Array(this.#lower.length);
		gain[question.place] = question.direction;
		let rest = 1;
		this.#rows.forEach(({ columns, factors }, r) => {
			const dual = -rowDuals[r]!;
			if (Math.abs(dual) < TINY) return;
			columns.forEach((p, i) => (gain[p]! -= dual * factors[i]!));
			const [lower, upper] = this.#sides(question, r);
			rest -= dual > 0 ? dual * upper : dual * lower;
		});
		const known = new Set(question.attacker.knows.map((index) => this.#place.get(index)));
		const places: number[] = [];
		const most: number[] = [];
		for (let p = 0; p < gain.length; p++) {
			if (Math.abs(gain[p]!) < TINY || known.has(p)) continue;
			const [below, above] = this.ends(question, p);
			const reach = gain[p]! > 0 ? gain[p]! * above : -gain[p]! * below;
			if (this.certain[p]) rest -= reach;
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
