import { AttackProgram, type Cut, type Openness, type Question, type Witness } from "./attack-program.ts";
import type { Attacker } from "./attackers.ts";
import type { OwnCell } from "./levels.ts";
import type { Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";

/** Where shields are to be chosen, and against whom. */
export interface ShieldProblem {
	table: ProtectionTable;
	/** cells to be protected */
	own: readonly OwnCell[];
	/** the first is `everybody`: what serves against them is tried against the others before anything is solved */
	attackers: readonly Attacker[];
	/** cells that may move at all: withheld for their own sake, or such that may be withheld; in the table's order */
	scope: readonly number[];
	/** cells of the scope that are withheld whatever is chosen */
	certain: ReadonlySet<number>;
}

interface Target extends Question {
	own: OwnCell;
	quantity: number;
	/** by attacker: possible tables that were found, newest first */
	seen: Map<Attacker, Witness[]>;
}

const KEPT_WITNESSES = 4;
const SHOWN = 0.02;

/** No choice of shields protects this cell. */
export class Unprotectable extends Error {
	constructor(readonly index: number) {
		super("a cell cannot be protected by any shield in its scope");
	}
}

/**
 * Asks for every cell to be protected, quantity, direction and attacker whether a pattern protects it, and tells cuts
 * that the pattern violates. Possible tables once found are kept: while a pattern allows one, nothing is solved.
 */
export class Separator {
	readonly certain: Uint8Array;
	readonly #programs: AttackProgram[];
	readonly #targets: Target[];
	readonly #place: ReadonlyMap<number, number>;
	/** place -> attackers who know that cell */
	readonly #knowers = new Map<number, Attacker[]>();
	/** attackers who know more than cells: no possible table of another's tells of theirs */
	readonly #apart: Attacker[];

	constructor(
		solver: Solver,
		readonly problem: ShieldProblem,
	) {
		const { table, own, attackers, scope } = problem;
		this.#place = new Map(scope.map((index, place) => [index, place]));
		this.certain = Uint8Array.from(scope, (index) => (problem.certain.has(index) ? 1 : 0));
		this.#programs = table.quantities.map(
			(quantity) => new AttackProgram(solver, table, quantity, scope, this.certain, attackers),
		);
		const everybody = attackers[0]!;
		this.#apart = attackers.slice(1).filter(({ bounds, relations }) => bounds?.length || relations?.length);
		for (const attacker of attackers.slice(1)) {
			if (this.#apart.includes(attacker)) continue;
			for (const index of attacker.knows) {
				const place = this.#place.get(index);
				if (place === undefined) continue;
				this.#knowers.set(place, [...(this.#knowers.get(place) ?? []), attacker]);
			}
		}
		this.#targets = own.flatMap((cell) =>
			table.quantities.flatMap(({ key }, quantity) =>
				([1, -1] as const).flatMap((direction) => {
					const level = everybody.asks(cell, key, direction);
					const place = this.#place.get(cell.index);
					if (!(level > 0) || place === undefined) return [];
					return [{ own: cell, quantity, place, direction, level, attacker: everybody, seen: new Map() }];
				}),
			),
		);
	}

	get linearPrograms(): number {
		return this.#programs.reduce((sum, { runs }) => sum + runs, 0);
	}

	/**
	 * Cuts that the pattern violates; none when it protects every cell.
	 * @param withheld by place, 0 to 1; for `whole` only 0 and 1.
	 * @throws {Unprotectable}
	 */
	cuts(withheld: Float64Array, whole: boolean): Cut[] {
		const cuts = new Map<string, Cut>();
		for (const target of this.#targets) {
			const first = this.#try(target, withheld, whole);
			if ("cut" in first) {
				cuts.set(keyOf(first.cut), first.cut);
				continue;
			}
			const others = new Set([...first.witness.moved.flatMap((p) => this.#knowers.get(p) ?? []), ...this.#apart]);
			for (const attacker of others) {
				const { key } = this.problem.table.quantities[target.quantity]!;
				const level = attacker.asks(target.own, key, target.direction);
				if (!(level > 0)) continue;
				const found = this.#try({ ...target, attacker, level }, withheld, whole);
				if ("cut" in found) cuts.set(keyOf(found.cut), found.cut);
			}
		}
		return [...cuts.values()];
	}

	#try(target: Target, withheld: Float64Array, whole: boolean): { witness: Witness } | { cut: Cut } {
		const seen = target.seen.get(target.attacker) ?? [];
		const known = seen.find((witness) => this.#fits(witness, withheld, whole));
		if (known) return { witness: known };
		const program = this.#programs[target.quantity]!;
		for (const shown of [SHOWN, 0]) {
			const open: Openness = { of: withheld, whole, shown };
			const answer = program.ask(target, open);
			if ("cut" in answer) {
				if (answer.cut === null) throw new Unprotectable(target.own.index);
				if (isViolated(answer.cut, withheld)) return { cut: answer.cut };
				// The relaxed search allowed less than the truth does: nothing is wrong that a cut could tell.
				if (shown === 0 && !whole) return { witness: { moved: [], by: [] } };
				if (shown === 0) throw new Error("a pattern fails by less than can be told");
			} else if (shown === 0) {
				target.seen.set(target.attacker, [answer.witness, ...seen].slice(0, KEPT_WITNESSES));
				return answer;
			}
		}
		throw new Error("unreachable");
	}

	#fits({ moved, by }: Witness, withheld: Float64Array, whole: boolean): boolean {
		return moved.every((p, i) => {
			if (this.certain[p]) return true;
			return whole ? withheld[p] === 1 : Math.abs(by[i]!) <= withheld[p]! + 1e-7;
		});
	}

	dispose() {
		for (const program of this.#programs) program.dispose();
	}
}

export function isViolated({ places, shares }: Cut, withheld: Float64Array): boolean {
	return places.reduce((sum, p, i) => sum + shares[i]! * withheld[p]!, 0) < 1 - 1e-5;
}

const keyOf = ({ places, shares }: Cut) => places.map((p, i) => `${p}:${shares[i]!.toFixed(6)}`).join(" ");
