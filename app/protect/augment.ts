import type { Moved } from "./knowers.ts";
import { relationsAmong } from "./relations.ts";
import { LinearProgram, type Column, type Solver } from "./solver.ts";
import { childrenOf, type ProtectionTable } from "./table.ts";

/** Above this many cells with growers, a way to move a cell is sought near it first. */
const SMALL_TABLE = 1500;
/** Below this share of the mean cell a movement is rounding. */
const STILL = 1e-8;
/** What moving an already withheld cell costs, the mean cell's weight being 1: little, so that short ways win. */
const HIDDEN_COST = 1e-4;

export interface Wish {
	cell: number;
	quantity: string;
	/** +level or -level, in units of the quantity */
	move: number;
	/** cells that may not move: what an attacker knows, or what is to be shown */
	fixed: readonly number[];
	/** Least values of cells, as an attacker who has a part of each knows them. */
	atLeast?: Iterable<readonly [cell: number, least: number]>;
}

interface Scope {
	program: LinearProgram;
	cells: number[];
	place: Map<number, number>;
	scale: number;
}

/**
 * Finds the cheapest way to move one cell while all equations hold and nothing becomes negative. The cells that move
 * are those an attacker could not tell apart from the truth, if all of them were withheld.
 * Each program has two columns a cell, up and down, so that cost is by distance moved.
 */
export class Augmenter {
	readonly #scopes = new Map<string, Scope>();
	readonly #chains: (index: number) => string[];
	readonly #members: (root: string) => number[];

	constructor(
		readonly solver: Solver,
		readonly table: ProtectionTable,
		readonly weights: readonly number[],
		readonly hidden: Set<number>,
		readonly locked: Set<number>,
	) {
		const { chainOf, membersOf } = nearness(table);
		this.#chains = chainOf;
		this.#members = membersOf;
	}

	/** Cells that move, the wished one among them, with their distances; null when there is no way at all. */
	find(wish: Wish): Moved[] | null {
		for (const root of this.#chains(wish.cell)) {
			const moved = this.#solve(this.#scope(root, wish.quantity), wish);
			if (moved) return moved;
		}
		return null;
	}

	hide(index: number) {
		this.hidden.add(index);
		for (const scope of this.#scopes.values()) {
			const place = scope.place.get(index);
			if (place !== undefined) for (const side of [0, 1]) scope.program.setCost(2 * place + side, HIDDEN_COST);
		}
	}

	show(index: number) {
		this.hidden.delete(index);
		for (const scope of this.#scopes.values()) {
			const place = scope.place.get(index);
			if (place !== undefined) for (const side of [0, 1]) scope.program.setCost(2 * place + side, this.weights[index]!);
		}
	}

	/** Lets a locked cell move from now on. */
	unlock(index: number) {
		this.locked.delete(index);
		this.dispose();
	}

	dispose() {
		for (const { program } of this.#scopes.values()) program.dispose();
		this.#scopes.clear();
	}

	#solve(scope: Scope, wish: Wish): Moved[] | null {
		const { program, place, cells, scale } = scope;
		const column = 2 * place.get(wish.cell)!;
		const distance = Math.abs(wish.move) / scale;
		const fixed = wish.fixed.flatMap((index) => place.get(index) ?? []);
		for (const p of fixed) this.#bound(scope, wish.quantity, p, false);
		const low: number[] = [];
		for (const [index, least] of wish.atLeast ?? []) {
			const p = place.get(index);
			if (p === undefined || least <= 0 || this.locked.has(index) || fixed.includes(p)) continue;
			low.push(p);
			const value = this.table.cells[index]!.quantities[wish.quantity]!.total;
			program.setBounds(2 * p + 1, 0, Math.max(0, value - least) / scale);
		}
		program.setBounds(column, wish.move > 0 ? distance : 0, wish.move > 0 ? distance : 0);
		program.setBounds(column + 1, wish.move < 0 ? distance : 0, wish.move < 0 ? distance : 0);
		const outcome = program.solve();
		for (const p of [...fixed, ...low]) this.#bound(scope, wish.quantity, p, true);
		this.#bound(scope, wish.quantity, place.get(wish.cell)!, true);
		if (outcome.status !== "optimal") return null;
		return cells.flatMap((index, p): Moved[] => {
			const by = outcome.values[2 * p]! - outcome.values[2 * p + 1]!;
			return Math.abs(by) > STILL ? [[index, by * scale]] : [];
		});
	}

	#bound(scope: Scope, quantity: string, p: number, free: boolean) {
		const index = scope.cells[p]!;
		const may = free && !this.locked.has(index);
		const value = this.table.cells[index]!.quantities[quantity]!.total / scope.scale;
		scope.program.setBounds(2 * p, 0, may ? Infinity : 0);
		scope.program.setBounds(2 * p + 1, 0, may ? value : 0);
	}

	#scope(root: string, quantityKey: string): Scope {
		const name = `${quantityKey} ${root}`;
		const known = this.#scopes.get(name);
		if (known) return known;
		const cells = this.#members(root);
		const place = new Map(cells.map((index, p) => [index, p]));
		const quantity = this.table.quantities.find(({ key }) => key === quantityKey)!;
		const value = (index: number) => this.table.cells[index]!.quantities[quantityKey]!.total;
		const scale = cells.reduce((sum, index) => sum + value(index), 0) / Math.max(1, cells.length) || 1;
		const columns = cells.flatMap((index): Column[] => {
			const cost = this.hidden.has(index) ? HIDDEN_COST : this.weights[index]!;
			const free = !this.locked.has(index);
			return [
				{ cost, lower: 0, upper: free ? Infinity : 0 },
				{ cost, lower: 0, upper: free ? value(index) / scale : 0 },
			];
		});
		const rows = relationsAmong(this.table, quantity, place).map(({ cells: among, factors, lower, upper }) => ({
			lower: lower / scale,
			upper: upper / scale,
			columns: among.flatMap((index) => [2 * place.get(index)!, 2 * place.get(index)! + 1]),
			factors: factors.flatMap((factor) => [factor, -factor]),
		}));
		const scope = { program: new LinearProgram(this.solver, columns, rows, "bounds"), cells, place, scale };
		this.#scopes.set(name, scope);
		return scope;
	}
}

/** Parts of the table to search one after the other: around a cell in its largest tree, then wider, then all of it. */
function nearness(table: ProtectionTable) {
	const living = table.cells.flatMap((cell, index) => (cell.owners > 0 ? [index] : []));
	const sizes = table.hierarchies.map((tree) => Object.keys(tree.parent).length);
	const d = sizes.indexOf(Math.max(...sizes));
	const tree = table.hierarchies[d]!;
	if (living.length <= SMALL_TABLE) return { chainOf: () => [tree.root], membersOf: () => living };
	const children = childrenOf(tree);
	const byCode = new Map<string, number[]>();
	for (const index of living) {
		const code = table.cells[index]!.coordinates[d]!;
		byCode.set(code, [...(byCode.get(code) ?? []), index]);
	}
	const membersOf = (root: string): number[] => [
		...(byCode.get(root) ?? []),
		...(children.get(root) ?? []).flatMap((code) => membersOf(code)),
	];
	const chainOf = (index: number): string[] => {
		const chain: string[] = [];
		let code: string | undefined = tree.parent[table.cells[index]!.coordinates[d]!] ?? tree.root;
		for (; code; code = tree.parent[code]) chain.push(code);
		return chain;
	};
	return { chainOf, membersOf };
}
