import type { Attacker } from "./attackers.ts";
import type { ProtectionTable } from "./table.ts";

/** A cell of a possible table, by how much it lies above its value there. */
export type Moved = readonly [cell: number, distance: number];

type Part = { attacker: Attacker; amount: number };

/**
 * Who can tell a possible table from the truth by what they know of single cells: one of them has another value than they
 * know it to have, or less than their own part. Such attackers are few, so that only they need be asked.
 */
export class Knowers {
	readonly #alone = new Map<number, Attacker[]>();
	readonly #holders = new Map<number, (readonly [Attacker, readonly number[]])[]>();
	/** by quantity, cell -> parts, the largest first; made as they are asked for */
	readonly #parts: Map<number, Part[]>[];

	constructor(
		readonly table: ProtectionTable,
		attackers: readonly Attacker[],
	) {
		for (const attacker of attackers) {
			for (const cell of attacker.knows) add(this.#alone, cell, attacker);
			for (const [cell, amounts] of attacker.holds ?? []) add(this.#holders, cell, [attacker, amounts] as const);
		}
		this.#parts = table.quantities.map(() => new Map());
	}

	/** Whether anybody knows this very cell. */
	isKnown(cell: number): boolean {
		return this.#alone.has(cell);
	}

	/** Attackers who know that this is not the truth, the quantity given by its position. */
	objectors(quantity: number, moved: Iterable<Moved>): Set<Attacker> {
		const found = new Set<Attacker>();
		const { key } = this.table.quantities[quantity]!;
		for (const [cell, distance] of moved) {
			for (const attacker of this.#alone.get(cell) ?? []) found.add(attacker);
			if (distance >= 0) continue;
			const { total } = this.table.cells[cell]!.quantities[key]!;
			for (const { attacker, amount } of this.#partsOf(quantity, cell)) {
				if (amount <= total + distance + ROUNDING * total) break;
				found.add(attacker);
			}
		}
		return found;
	}

	#partsOf(quantity: number, cell: number): readonly Part[] {
		const known = this.#parts[quantity]!.get(cell);
		if (known) return known;
		const parts = (this.#holders.get(cell) ?? [])
			.map(([attacker, amounts]) => ({ attacker, amount: amounts[quantity]! }))
			.toSorted((a, b) => b.amount - a.amount);
		this.#parts[quantity]!.set(cell, parts);
		return parts;
	}
}

/** What the solver may be off by, as a share of a cell. */
const ROUNDING = 1e-9;

/** Whether this one attacker takes it for possible. */
export function isPossibleTo(table: ProtectionTable, attacker: Attacker, quantity: number, moved: Iterable<Moved>) {
	const { key } = table.quantities[quantity]!;
	for (const [cell, distance] of moved) {
		if (attacker.knows.includes(cell)) return false;
		const part = attacker.holds?.get(cell)?.[quantity];
		if (part === undefined || distance >= 0) continue;
		const { total } = table.cells[cell]!.quantities[key]!;
		if (part > total + distance + ROUNDING * total) return false;
	}
	return true;
}

function add<K, V>(lists: Map<K, V[]>, key: K, value: V) {
	const list = lists.get(key);
	if (list) list.push(value);
	else lists.set(key, [value]);
}
