import { ckmeans } from "simple-statistics";
import { lookOf, type Cell } from "./cell.ts";

/** One class of a map: every shown value from `from` to `to`, both included, in the measure's unit as rounded for reading. */
export type MapClass = { from: number; to: number; count: number };

/**
 * Natural breaks: classes whose values lie as close together as they can (exact, by dynamic programming). Values are
 * rounded to the decimals that readers see first, so that no two classes show the same number.
 * @param values the shown values only: a class edge must not be drawn from a figure that is withheld.
 * @returns ascending classes, fewer than `most` where there are fewer different values, none for no values.
 * Source: Wang and Song, Ckmeans.1d.dp: optimal k-means clustering in one dimension (2011), as in simple-statistics.
 */
export function naturalBreaks(values: number[], decimals: number, most = 5): MapClass[] {
	const rounded = values.map((value) => roundTo(value, decimals));
	const different = new Set(rounded).size;
	if (different === 0) return [];
	return ckmeans(rounded, Math.min(most, different)).map((members) => ({
		from: members[0] ?? 0,
		to: members.at(-1) ?? 0,
		count: members.length,
	}));
}

/** Which class a value falls in, from 0; null for a value that lies in none, which is then not drawn in colour. */
export function classOf(value: number | null, classes: MapClass[], decimals: number): number | null {
	if (value === null) return null;
	const rounded = roundTo(value, decimals);
	const index = classes.findIndex(({ from, to }) => rounded >= from && rounded <= to);
	return index < 0 ? null : index;
}

export function classesOfCells(cells: Cell[], decimals: number): MapClass[] {
	const values = cells.flatMap((cell) => (lookOf(cell) === "number" && cell.value !== null ? [cell.value] : []));
	return naturalBreaks(values, decimals);
}

function roundTo(value: number, decimals: number): number {
	return Number(value.toFixed(decimals));
}
