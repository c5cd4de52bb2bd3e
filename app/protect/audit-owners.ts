import type { Block } from "./audit-blocks.ts";
import { liesInside, soleHoldings } from "./attackers.ts";
import type { OwnCell } from "./levels.ts";
import { LinearProgram, type Solver } from "./solver.ts";
import type { ProtectionTable } from "./table.ts";

/** Keeps a search from moving cells that it need not move. */
const LEAST = 1e-6;
const ROUNDING = 1e-6;

/**
 * Tries the cells of one block for owners who know cells of it alone. For each own cell a point at its level is sought
 * that fits all that is shown; only an owner whose known cells moved on the way there could object, and for each such
 * owner a point is sought that leaves those cells where they are. A cell that its own single owner knows is not
 * protected from that owner. Where the owner has a part in the cell, only the upper side is asked: the level counts
 * that owner's part as known already.
 */
export function auditAttackers(
	solver: Solver,
	table: ProtectionTable,
	block: Block,
	own: readonly OwnCell[],
	quantity: string,
): { failed: number[]; linearPrograms: number } {
	const column = new Map(block.cells.map((index, place) => [index, place]));
	const holdings = soleHoldings(table);
	const knower = new Map([...holdings].flatMap(([owner, cells]) => cells.map((index) => [index, owner] as const)));
	const targets = own.filter((cell) => column.has(cell.index) && cell.levels[quantity]! > 0);
	if (targets.length === 0 || !block.cells.some((index) => knower.has(index))) return { failed: [], linearPrograms: 0 };

	const search = new PointSearch(solver, block);
	const failed: number[] = [];
	try {
		for (const { index, levels } of targets) {
			const place = column.get(index)!;
			const level = levels[quantity]! / block.scale;
			const sides = [level, -Math.min(level, block.values[place]! / block.scale)].filter((side) => side !== 0);
			const safe = sides.every((side) => {
				const moved = search.reach(place, side, []);
				if (!moved) return false;
				const owners = new Set(moved.flatMap((other) => knower.get(block.cells[other]!) ?? []));
				owners.delete(knower.get(index) ?? "");
				return [...owners].every((owner) => {
					const known = holdings.get(owner)!;
					if (side < 0 && known.some((cell) => liesInside(table, cell, index))) return true;
					return (
						search.reach(
							place,
							side,
							known.flatMap((cell) => column.get(cell) ?? []),
						) !== null
					);
				});
			});
			if (!safe) failed.push(index);
		}
		return { failed, linearPrograms: search.runs };
	} finally {
		search.dispose();
	}
}

/** Looks for points that fit all that is shown, with one cell at a wanted distance and some cells held still. */
class PointSearch {
	runs = 0;
	readonly #program: LinearProgram;

	constructor(
		solver: Solver,
		readonly block: Block,
	) {
		// Two columns a cell, above and below the truth, as the search wants to know who moved at all.
		const columns = block.values.flatMap((value) => [
			{ cost: LEAST, lower: 0, upper: Infinity },
			{ cost: LEAST, lower: 0, upper: value / block.scale },
		]);
		const rows = block.rows.map((row) => ({
			...row,
			columns: row.columns.flatMap((c) => [2 * c, 2 * c + 1]),
			factors: row.factors.flatMap((f) => [f, -f]),
		}));
		this.#program = new LinearProgram(solver, columns, rows, "costs");
	}

	/** Places that moved, or null when the cell cannot get that far. */
	reach(place: number, side: number, still: readonly number[]): number[] | null {
		const goal = 2 * place + (side > 0 ? 0 : 1);
		const program = this.#program;
		const wanted = Math.abs(side);
		for (const p of still) this.#hold(p, true);
		program.setBounds(goal, 0, wanted);
		program.setBounds(goal ^ 1, 0, 0);
		program.setCost(goal, -1);
		const outcome = program.solve();
		this.runs += 1;
		program.setCost(goal, LEAST);
		this.#hold(place, false);
		for (const p of still) this.#hold(p, false);
		if (outcome.status !== "optimal") throw new Error(`the audit's search ended ${outcome.status}`);
		const distance = (p: number) => outcome.values[2 * p]! - outcome.values[2 * p + 1]!;
		if (Math.abs(distance(place)) < wanted * (1 - ROUNDING)) return null;
		return this.block.cells.flatMap((_, p) => (Math.abs(distance(p)) > 1e-8 ? [p] : []));
	}

	#hold(place: number, still: boolean) {
		const value = this.block.values[place]! / this.block.scale;
		this.#program.setBounds(2 * place, 0, still ? 0 : Infinity);
		this.#program.setBounds(2 * place + 1, 0, still ? 0 : value);
	}

	dispose() {
		this.#program.dispose();
	}
}
