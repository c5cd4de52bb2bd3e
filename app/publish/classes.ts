import { ckmeans } from "simple-statistics";
import type { FigureShape } from "#app/lib/format.ts";
import { lookOf, type Cell } from "./cell.ts";
import { type ClassSteps, type ClassWay, stepsOfUnit } from "./class-steps.ts";

/** One class of a map: every shown value from `from` to `to`, both included, in the measure's unit as rounded for reading. */
export type MapClass = { from: number; to: number; count: number };

const most = 5;

/**
 * Natural breaks: classes whose values lie as close together as they can (exact, by dynamic programming). Values are
 * rounded to the decimals that readers see first, so that no two classes show the same number.
 * @param values the shown values only: a class edge must not be drawn from a figure that is withheld.
 * @returns ascending classes, fewer than `count` where there are fewer different values, none for no values.
 * Source: Wang and Song, Ckmeans.1d.dp: optimal k-means clustering in one dimension (2011), as in simple-statistics.
 */
export function naturalBreaks(values: number[], decimals: number, count = most): MapClass[] {
	const rounded = values.map((value) => roundTo(value, decimals));
	const different = new Set(rounded).size;
	if (different === 0) return [];
	return ckmeans(rounded, Math.min(count, different)).map((members) => ({
		from: members[0] ?? 0,
		to: members.at(-1) ?? 0,
		count: members.length,
	}));
}

/**
 * Classes by declared steps. A class ends one shown digit below the next, so that no two show the same number; the outer
 * ones reach out to values beyond the steps.
 * @param values the shown values only, of every map that shares the classes.
 */
export function fixedClasses(values: number[], decimals: number, steps: ClassSteps): MapClass[] {
	if (values.length === 0) return [];
	const rounded = values.map((value) => roundTo(value, decimals));
	const [least, greatest] = [Math.min(...rounded), Math.max(...rounded)];
	const digit = 10 ** -decimals;
	const all = "edges" in steps ? steps.edges : edgesBetween(least, greatest, digit, steps);
	const edges = [...new Set(all.map((edge) => roundTo(edge, decimals)))];
	return edges.slice(0, -1).map((edge, index) => {
		const next = edges[index + 1] ?? edge;
		const isLast = index === edges.length - 2;
		// By widths the last class ends before an edge that no value reaches; by edges the last edge belongs to it.
		const end = isLast && "edges" in steps ? Math.max(next, greatest) : next - digit;
		const [from, to] = [index === 0 ? Math.min(edge, least) : edge, roundTo(end, decimals)];
		return { from, to, count: rounded.filter((value) => value >= from && value <= to).length };
	});
}

type Widths = Extract<ClassSteps, { widths: unknown }>;

/** The edges around all values, as wide apart as the narrowest width that needs few enough classes. */
function edgesBetween(least: number, greatest: number, digit: number, { widths, from }: Widths): number[] {
	const stepOf = (value: number, width: number) => Math.floor((value - from) / width + 1e-9);
	const classesBy = (width: number) => stepOf(greatest, width) - stepOf(least, width) + 1;
	const width = widths.find((each) => each >= digit && classesBy(each) <= most) ?? widths.at(-1) ?? digit;
	const start = stepOf(least, width);
	return Array.from({ length: classesBy(width) + 1 }, (_, index) => from + (start + index) * width);
}

/** Which class a value falls in, from 0; null for a value that lies in none, which is then not drawn in colour. */
export function classOf(value: number | null, classes: MapClass[], decimals: number): number | null {
	if (value === null) return null;
	const rounded = roundTo(value, decimals);
	const index = classes.findIndex(({ from, to }) => rounded >= from && rounded <= to);
	return index < 0 ? null : index;
}

export function classesOfCells(
	cells: Cell[],
	{ decimals, unit }: Pick<FigureShape, "decimals" | "unit">,
	way: ClassWay = "natural",
): MapClass[] {
	const values = cells.flatMap((cell) => (lookOf(cell) === "number" && cell.value !== null ? [cell.value] : []));
	return way === "fixed" ? fixedClasses(values, decimals, stepsOfUnit(unit)) : naturalBreaks(values, decimals);
}

function roundTo(value: number, decimals: number): number {
	return Number(value.toFixed(decimals));
}
