import { AttackProgram, type Cut, isViolated, type Witness } from "./attack-program.ts";
import type { Attacker } from "./attackers.ts";
import { isPossibleTo, type Knowers, type Moved } from "./knowers.ts";
import { Knowledge } from "./knowledge.ts";
import type { OwnCell } from "./levels.ts";
import { LineCutter } from "./line-cuts.ts";
import type { LineGuard } from "./lines.ts";
import type { Row, Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";
import type { Told } from "./told.ts";
import { WitnessProgram } from "./witness-program.ts";

/** Where shields are to be chosen, and against whom. */
export interface ShieldProblem {
	table: ProtectionTable;
	/** cells to be protected */
	own: readonly OwnCell[];
	/** the first is `everybody`: what serves against them is tried against the others before anything is solved */
	attackers: readonly Attacker[];
	/** who of them can tell one table from another by single cells */
	knowers: Knowers;
	/** Sums of withheld cells of a line that must not be found either; left out where nobody asks for them. */
	sums?: LineGuard;
	/** What is known from outside, beside what the attackers' bounds tell. */
	told?: Told;
	/** cells that may move at all: withheld for their own sake, or such that may be withheld; in the table's order */
	scope: readonly number[];
	/** cells of the scope that are withheld whatever is chosen */
	certain: ReadonlySet<number>;
	/** Whether cells outside the scope stand still, or might move at will: then a bound holds for any wider scope. */
	outside: "still" | "free";
}

interface Target {
	own: OwnCell;
	quantity: number;
	place: number;
	direction: 1 | -1;
	/** what everybody must be kept from */
	level: number;
	/** possible tables that were found, newest first */
	seen: Seen[];
}

interface Seen {
	witness: Witness;
	level: number;
	/** whose bounds and relations it fits */
	attacker: Attacker;
}

const KEPT_WITNESSES = 24;
const SHOWN = 0.02;
/** A pattern that violates so many is not worth more questions: the next one will differ. */
const MOST_CUTS = 40;
const MOST_CUTS_OF_A_TARGET = 3;

/** No choice of shields protects every cell. */
export class Unprotectable extends Error {
	constructor() {
		super("a cell cannot be protected by any shield in its scope");
	}
}

/** The limit of linear programs was met before the answer. */
export class OutOfWork extends Error {}

/**
 * Asks for every cell to be protected, quantity, direction and attacker whether a pattern protects it, and tells cuts
 * that the pattern violates. Possible tables once found are kept: while a pattern allows one, nothing is solved.
 */
export class Separator {
	readonly certain: Uint8Array;
	readonly #programs: { cut: AttackProgram; witness: WitnessProgram }[];
	readonly #targets: Target[];
	readonly #place: ReadonlyMap<number, number>;
	readonly #lines: LineCutter | null;
	/** attackers who know more than cells and what everybody knows: no possible table of another's tells of theirs */
	readonly #apart: Attacker[];
	readonly #toldBy = new Map<object, string>();
	/** where the next questions begin, so that every target has its turn */
	#next = 0;

	constructor(
		solver: Solver,
		readonly problem: ShieldProblem,
		readonly mostPrograms: number,
	) {
		const { table, attackers, scope } = problem;
		this.#place = new Map(scope.map((index, place) => [index, place]));
		this.certain = Uint8Array.from(scope, (index) => (problem.certain.has(index) ? 1 : 0));
		this.#apart = attackers.slice(1).filter((attacker) => !this.#sameBounds(attacker, attackers[0]!));
		const known = new Set(scope.flatMap((index, place) => (problem.knowers.isKnown(index) ? [place] : [])));
		this.#programs = table.quantities.map((quantity) => {
			const knowledge = new Knowledge(table, quantity, scope, this.certain, attackers, problem.outside);
			return {
				cut: new AttackProgram(solver, knowledge),
				witness: new WitnessProgram(solver, knowledge, known),
			};
		});
		this.#targets = this.#listTargets();
		this.#lines = problem.sums ? new LineCutter(solver, problem, this.certain) : null;
	}

	get linearPrograms(): number {
		const own = this.#programs.reduce((sum, { cut, witness }) => sum + cut.runs + witness.runs, 0);
		return own + (this.#lines?.runs ?? 0);
	}

	/** Rows that the pattern violates since sums of its lines can be found; none when they cannot. */
	lineCuts(withheld: Float64Array): Row[] {
		return this.#lines?.cuts(withheld) ?? [];
	}

	/**
	 * Cuts that the pattern violates; none when it protects every cell.
	 * @param withheld by place, 0 to 1; for `whole` only 0 and 1.
	 * @throws {Unprotectable | OutOfWork}
	 */
	cuts(withheld: Float64Array, whole: boolean): Cut[] {
		const cuts = new Map<string, Cut>();
		for (let asked = 0; asked < this.#targets.length && cuts.size < MOST_CUTS; asked++) {
			const target = this.#targets[this.#next++ % this.#targets.length]!;
			if (this.linearPrograms > this.mostPrograms) throw new OutOfWork();
			for (const cut of this.#cutsFor(target, withheld, whole)) cuts.set(keyOf(cut), cut);
		}
		return [...cuts.values()];
	}

	#cutsFor(target: Target, withheld: Float64Array, whole: boolean): Cut[] {
		const everybody = this.problem.attackers[0]!;
		const { key } = this.problem.table.quantities[target.quantity]!;
		const first = this.#try(target, everybody, target.level, withheld, whole);
		if ("cut" in first) return [first.cut];
		const cuts: Cut[] = [];
		const objectors = this.problem.knowers.objectors(target.quantity, this.#moved(first.seen));
		const others = new Set([...objectors, ...this.#apart]);
		for (const attacker of others) {
			const level = attacker.asks(target.own, key, target.direction);
			if (!(level > 0)) continue;
			const found = this.#try(target, attacker, level, withheld, whole);
			if ("cut" in found) cuts.push(found.cut);
			if (cuts.length === MOST_CUTS_OF_A_TARGET) break;
		}
		return cuts;
	}

	#try(
		target: Target,
		attacker: Attacker,
		level: number,
		withheld: Float64Array,
		whole: boolean,
	): { seen: Seen } | { cut: Cut } {
		const seen = this.#seen(target, attacker, level, withheld, whole);
		if (seen) return { seen };
		const { place, direction, quantity } = target;
		const question = { place, direction, level, attacker };
		const { cut: cutter, witness: finder } = this.#programs[quantity]!;
		const open = { of: withheld, whole, shown: 0 };
		const witness = finder.find(question, open);
		if (witness) return this.#keep(target, { witness, level, attacker });
		const answer = cutter.ask(question, open);
		if ("witness" in answer) return this.#keep(target, { witness: answer.witness, level, attacker });
		if (answer.cut === null) throw new Unprotectable();
		// The same with shown cells that move a little gives a cut on fewer cells, where it gives one at all.
		const second = cutter.ask(question, { ...open, shown: SHOWN });
		for (const { cut } of [second as { cut?: Cut | null }, answer]) {
			if (cut && isViolated(cut, withheld)) return { cut };
		}
		// The relaxed search allowed less than the truth does: nothing is wrong that a cut could tell.
		if (!whole) return { seen: { witness: { moved: [], by: [] }, level, attacker } };
		throw new Error("a pattern fails by less than can be told");
	}

	#seen(target: Target, attacker: Attacker, level: number, withheld: Float64Array, whole: boolean) {
		return target.seen.find(
			(seen) =>
				seen.level >= level &&
				this.#sameBounds(seen.attacker, attacker) &&
				this.#fits(seen.witness, withheld, whole) &&
				(seen.attacker === attacker || isPossibleTo(this.problem.table, attacker, target.quantity, this.#moved(seen))),
		);
	}

	#moved({ witness: { moved, by }, level }: Seen): Moved[] {
		return moved.map((p, i) => [this.problem.scope[p]!, by[i]! * level] as const);
	}

	#keep(target: Target, seen: Seen): { seen: Seen } {
		target.seen = [seen, ...target.seen].slice(0, KEPT_WITNESSES);
		return { seen };
	}

	/** By content: each attacker may hold a list of its own of what everybody knows. */
	#sameBounds(a: Attacker, b: Attacker): boolean {
		return (
			a === b || (this.#told(a.bounds) === this.#told(b.bounds) && this.#told(a.relations) === this.#told(b.relations))
		);
	}

	#told(list: Attacker["bounds"] | Attacker["relations"]): string {
		if (!list || list.length === 0) return "";
		const known = this.#toldBy.get(list) ?? JSON.stringify(list);
		this.#toldBy.set(list, known);
		return known;
	}

	#fits({ moved, by }: Witness, withheld: Float64Array, whole: boolean): boolean {
		return moved.every((p, i) => {
			if (this.certain[p]) return true;
			return whole ? withheld[p] === 1 : Math.abs(by[i]!) <= withheld[p]! + 1e-7;
		});
	}

	#listTargets(): Target[] {
		const { table, own, attackers } = this.problem;
		return own.flatMap((cell) =>
			table.quantities.flatMap(({ key }, quantity) =>
				([1, -1] as const).flatMap((direction) => {
					const level = attackers[0]!.asks(cell, key, direction);
					const place = this.#place.get(cell.index);
					if (!(level > 0) || place === undefined) return [];
					return [{ own: cell, quantity, place, direction, level, seen: [] }];
				}),
			),
		);
	}

	dispose() {
		for (const { cut, witness } of this.#programs) {
			cut.dispose();
			witness.dispose();
		}
		this.#lines?.dispose();
	}
}

const keyOf = ({ places, shares }: Cut) => places.map((p, i) => `${p}:${shares[i]!.toFixed(6)}`).join(" ");
