import { AttackProgram, isViolated, type Witness } from "./attack-program.ts";
import { Knowledge } from "./knowledge.ts";
import type { LineSum } from "./lines.ts";
import type { ShieldProblem } from "./separator.ts";
import type { Row, Solver } from "./solver.ts";
import type { Quantity } from "./table.ts";

const SHOWN = 0.02;

interface Asked {
	program: AttackProgram;
	/** by direction, the possible table that was found last */
	seen: Map<1 | -1, Witness>;
}

/**
 * What a pattern must do besides, so that sums of a line's withheld cells are not found: for each sum that is, either the
 * set of cells is another one, or something is withheld that lets the sum move. Where the line's total is shown the sum is
 * known as it stands; where not, a linear program tells.
 */
export class LineCutter {
	runs = 0;
	readonly #place: ReadonlyMap<number, number>;
	readonly #asked = new Map<string, Asked>();

	constructor(
		readonly solver: Solver,
		readonly problem: ShieldProblem,
		readonly certain: Uint8Array,
	) {
		this.#place = new Map(problem.scope.map((index, place) => [index, place]));
	}

	/** Rows that the pattern violates. @param withheld by place, 0 or 1 */
	cuts(withheld: Float64Array): Row[] {
		const { scope, sums } = this.problem;
		const hidden = new Set(scope.filter((_, p) => this.certain[p] || withheld[p] === 1));
		return sums!(hidden).flatMap((sum) => this.#cutsFor(sum, hidden, withheld));
	}

	#cutsFor(sum: LineSum, hidden: ReadonlySet<number>, withheld: Float64Array): Row[] {
		const { table, outside } = this.problem;
		// What lies outside may be anything, or is another block's to see to.
		const inScope = (index: number) => this.#place.has(index);
		if (!sum.cells.every(inScope) || (outside === "free" && !sum.others.every(inScope))) return [];
		const asking = table.quantities.filter(({ key }) => (sum.levels[key] ?? 0) > 0);
		const whole = sum.others.every((index) => index === sum.total || !hidden.has(index));
		if (whole && !hidden.has(sum.total)) {
			return asking.some((quantity) => this.#isOpen(sum, quantity)) ? [this.#row(sum, hidden, new Map())] : [];
		}
		for (const quantity of asking) {
			if (!this.#isOpen(sum, quantity)) continue;
			for (const direction of [1, -1] as const) {
				const shares = this.#tryToFind(sum, quantity, direction, withheld);
				if (shares) return [this.#row(sum, hidden, shares)];
			}
		}
		return [];
	}

	/** One cell that nobody knows is no sum. */
	#isOpen(sum: LineSum, { key }: Quantity): boolean {
		const told = this.problem.told?.cells?.get(key);
		return sum.cells.filter((index) => !told?.has(index)).length > 1;
	}

	/** null when the sum seems possible a level away; else by place what would let it move. */
	#tryToFind(sum: LineSum, quantity: Quantity, direction: 1 | -1, withheld: Float64Array): Map<number, number> | null {
		const { table, attackers } = this.problem;
		const value = sum.cells.reduce((all, index) => all + table.cells[index]!.quantities[quantity.key]!.total, 0);
		const level = direction > 0 ? sum.levels[quantity.key]! : Math.min(sum.levels[quantity.key]!, value);
		if (!(level > 0)) return null;
		const { program, seen } = this.#program(sum, quantity);
		const open = (p: number) => this.certain[p] || withheld[p] === 1;
		const last = seen.get(direction);
		if (last?.moved.every((p) => p === this.problem.scope.length || open(p))) return null;
		const question = { place: this.problem.scope.length, direction, level, attacker: attackers[0]! };
		const first = program.ask(question, { of: withheld, whole: true, shown: 0 });
		this.runs += 1;
		if ("witness" in first) {
			seen.set(direction, first.witness);
			return null;
		}
		const second = program.ask(question, { of: withheld, whole: true, shown: SHOWN });
		this.runs += 1;
		const sharp = "cut" in second && second.cut && isViolated(second.cut, withheld) ? second.cut : first.cut;
		return new Map(sharp?.places.map((p, i) => [p, sharp.shares[i]!]) ?? []);
	}

	#program(sum: LineSum, quantity: Quantity): Asked {
		const name = `${quantity.key} ${sum.cells.join(" ")}`;
		const known = this.#asked.get(name);
		if (known) return known;
		const { table, scope, attackers, outside } = this.problem;
		const knowledge = new Knowledge(table, quantity, scope, this.certain, attackers.slice(0, 1), outside, sum.cells);
		const asked = { program: new AttackProgram(this.solver, knowledge), seen: new Map() };
		this.#asked.set(name, asked);
		return asked;
	}

	/**
	 * What any pattern fulfils: it withholds some of what lets the sum move, or another cell of the line, or it shows one of
	 * these. A sum of own cells alone is guarded whatever else the line withholds.
	 */
	#row(sum: LineSum, hidden: ReadonlySet<number>, shares: ReadonlyMap<number, number>): Row {
		const factors = new Map<number, number>(shares);
		const shields = sum.cells.filter((index) => !this.problem.certain.has(index));
		const ownOnly = shields.length === 0 && sum.others.some((index) => index !== sum.total && hidden.has(index));
		const others = ownOnly ? [] : sum.others.filter((index) => !hidden.has(index));
		for (const index of others) {
			const place = this.#place.get(index);
			if (place !== undefined) factors.set(place, 1);
		}
		for (const index of shields) factors.set(this.#place.get(index)!, -1);
		return {
			lower: 1 - shields.length,
			upper: Infinity,
			columns: [...factors.keys()],
			factors: [...factors.values()],
		};
	}

	dispose() {
		for (const { program } of this.#asked.values()) program.dispose();
		this.#asked.clear();
	}
}
