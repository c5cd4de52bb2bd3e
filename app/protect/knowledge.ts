import type { Openness, Question } from "./attack-program.ts";
import type { Attacker } from "./attackers.ts";
import { relationsAmong } from "./relations.ts";
import type { Row } from "./solver.ts";
import type { ProtectionTable, Quantity } from "./table.ts";

const NONE: NonNullable<Attacker["bounds"]> = [];

/**
 * What attackers can write down about the cells of a scope in one quantity, as distances from the truth; cells outside
 * the scope stand still. Questions are asked in multiples of their level, so ends and sides are given in levels.
 */
export class Knowledge {
	/** columns are places in the scope; ends in units of the quantity */
	readonly rows: Row[] = [];
	/** rows with an end other than 0, or one attacker's alone: they are set anew for each question */
	readonly sided: number[] = [];
	readonly #tellers = new Map<number, Attacker>();
	readonly #values: Float64Array;
	readonly #place: ReadonlyMap<number, number>;
	readonly #places = new Map<Attacker, ReadonlySet<number>>();
	readonly #bounds = new Map<object, ReadonlyMap<number, { lower: number; upper: number }[]>>();
	readonly #position: number;
	/** by place: 1 where the cell is withheld whatever is chosen */
	readonly certain: Uint8Array;
	/** Place of the sum, where one is asked about: after those of the cells. */
	readonly sumPlace: number;

	/** @param sum cells of the scope whose sum is asked about, instead of single cells */
	constructor(
		table: ProtectionTable,
		readonly quantity: Quantity,
		readonly scope: readonly number[],
		certain: Uint8Array,
		attackers: readonly Attacker[],
		outside: "still" | "free" = "still",
		sum: readonly number[] = [],
	) {
		this.#position = table.quantities.indexOf(quantity);
		this.sumPlace = scope.length;
		this.certain = sum.length > 0 ? Uint8Array.from([...certain, 1]) : certain;
		const value = (index: number) => table.cells[index]!.quantities[quantity.key]!.total;
		this.#place = new Map(scope.map((index, place) => [index, place]));
		const values = scope.map(value);
		if (sum.length > 0) values.push(sum.reduce((whole, index) => whole + value(index), 0));
		this.#values = Float64Array.from(values);
		for (const relation of relationsAmong(table, quantity, this.#place, outside)) this.#addRow(relation);
		for (const attacker of attackers) {
			for (const relation of attacker.relations ?? []) {
				if (relation.quantity !== quantity.key) continue;
				const { cells, factors } = relation;
				const truth = cells.reduce((whole, index, i) => whole + factors[i]! * value(index), 0);
				this.#tellers.set(this.rows.length, attacker);
				this.#addRow({
					cells,
					factors,
					lower: Math.min(0, relation.lower - truth),
					upper: Math.max(0, relation.upper - truth),
				});
			}
		}
		if (sum.length > 0) {
			const columns = [...sum.map((index) => this.#place.get(index)!), this.sumPlace];
			this.rows.push({ columns, factors: [...sum.map(() => 1), -1], lower: 0, upper: 0 });
		}
		this.rows.forEach(({ lower, upper }, r) => {
			if (lower !== 0 || upper !== 0 || this.#tellers.has(r)) this.sided.push(r);
		});
	}

	get size(): number {
		return this.#values.length;
	}

	/** Places whose values this attacker knows. */
	placesOf(attacker: Attacker): ReadonlySet<number> {
		const known = this.#places.get(attacker);
		if (known) return known;
		const places = new Set(attacker.knows.flatMap((index) => this.#place.get(index) ?? []));
		this.#places.set(attacker, places);
		return places;
	}

	/** How far below and above the truth a withheld cell may lie for this attacker, in levels; the target up to 1. */
	ends({ attacker, level, place, direction }: Question, p: number): [below: number, above: number] {
		if (p === this.sumPlace) return [1, 1]; // nobody asks for more of it
		const part = attacker.holds?.get(this.scope[p]!)?.[this.#position] ?? 0;
		let below = Math.max(0, this.#values[p]! - part);
		let above = Infinity;
		for (const bound of this.#boundsOf(attacker).get(p) ?? []) {
			below = Math.max(0, Math.min(below, this.#values[p]! - bound.lower));
			above = Math.max(0, Math.min(above, bound.upper - this.#values[p]!));
		}
		if (p === place && direction > 0) above = Math.min(above, level);
		if (p === place && direction < 0) below = Math.min(below, level);
		return [below / level, above / level];
	}

	#boundsOf(attacker: Attacker): ReadonlyMap<number, { lower: number; upper: number }[]> {
		const list = attacker.bounds ?? NONE;
		const known = this.#bounds.get(list);
		if (known) return known;
		const byPlace = new Map<number, { lower: number; upper: number }[]>();
		for (const bound of list) {
			const place = this.#place.get(bound.cell);
			if (bound.quantity !== this.quantity.key || place === undefined) continue;
			byPlace.set(place, [...(byPlace.get(place) ?? []), bound]);
		}
		this.#bounds.set(list, byPlace);
		return byPlace;
	}

	/** Bounds of every place for a question, in levels. */
	bound(question: Question, open: Openness, lower: Float64Array, upper: Float64Array): void {
		for (let p = 0; p < lower.length; p++) {
			const share = this.certain[p] ? 1 : Math.max(open.of[p]!, open.shown);
			const [below, above] = share === 0 ? [0, 0] : this.ends(question, p);
			const free = this.certain[p] || (open.whole && share === 1);
			lower[p] = free ? -below : -Math.min(below, 1) * share;
			upper[p] = free ? above : Math.min(above, 1) * share;
		}
		for (const p of this.placesOf(question.attacker)) lower[p] = upper[p] = 0;
	}

	/** Both ends of a row for a question, in levels. */
	sides({ attacker, level }: Question, r: number): [lower: number, upper: number] {
		const teller = this.#tellers.get(r);
		if (teller && teller !== attacker) return [-Infinity, Infinity];
		const { lower, upper } = this.rows[r]!;
		return [lower / level, upper / level];
	}

	#addRow({ cells, factors, lower, upper }: { cells: readonly number[]; factors: readonly number[] } & Ends) {
		const columns: number[] = [];
		const inside: number[] = [];
		cells.forEach((index, i) => {
			const place = this.#place.get(index);
			if (place === undefined) return;
			columns.push(place);
			inside.push(factors[i]!);
		});
		this.rows.push({ columns, factors: inside, lower, upper });
	}
}

interface Ends {
	lower: number;
	upper: number;
}
