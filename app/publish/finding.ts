import { type CropCell, lookOf } from "./cell.ts";
import type { ReleaseMeasure } from "./release.ts";

/** What a season's figures say first: the measure that leads the release, and the crop for which it is worst. */
export type Finding = { measure: ReleaseMeasure; cell: CropCell & { value: number } };

/** The measure that leads: the first of which one direction is bad news, else the first at all. */
export function leadingMeasure(measures: ReleaseMeasure[]): ReleaseMeasure | undefined {
	return measures.find((measure) => measure.worse !== null) ?? measures[0];
}

/** The crops with a number, worst first, and of days the earliest first; "all" is no crop and stays out. */
export function worstFirst(measure: ReleaseMeasure, cells: CropCell[]): Finding["cell"][] {
	const turn = measure.worse === "less" || measure.kind === "day" ? 1 : -1;
	return cells
		.filter(
			(cell): cell is Finding["cell"] => cell.cropKey !== "all" && lookOf(cell) === "number" && cell.value !== null,
		)
		.toSorted((a, b) => turn * (a.value - b.value) || a.cropKey.localeCompare(b.cropKey));
}

/** The crop that stands out, or all crops together where a measure is told of them alone. */
export function leadingCell(measure: ReleaseMeasure, cells: CropCell[]): Finding["cell"] | undefined {
	const [worst] = worstFirst(measure, cells);
	if (worst || !isOfAllAlone(cells)) return worst;
	return cells.find((cell): cell is Finding["cell"] => cell.cropKey === "all" && lookOf(cell) === "number");
}

/**
 * Whether one area's cells of a measure are told of all crops together and of none by itself, as what was asked once of an
 * operation is: then the crops are nothing to set beside each other.
 */
export function isOfAllAlone(cells: CropCell[]): boolean {
	const ofCrops = cells.filter(({ cropKey, status }) => cropKey !== "all" && status === "shown");
	const all = cells.find(({ cropKey }) => cropKey === "all");
	const isTold = all !== undefined && lookOf(all) !== "no_figure";
	return isTold && ofCrops.length > 0 && ofCrops.every((cell) => lookOf(cell) === "no_figure");
}

export function findingOf(measure: ReleaseMeasure | undefined, cells: CropCell[]): Finding | null {
	const leading = measure && leadingCell(measure, cells);
	return leading ? { measure, cell: leading } : null;
}

/** The crops in a table's order: all crops together last, what has no number after what has. */
export function cropRows(measure: ReleaseMeasure, cells: CropCell[]): CropCell[] {
	if (isOfAllAlone(cells)) return cells.filter(({ cropKey }) => cropKey === "all");
	const numbered = worstFirst(measure, cells);
	const named = new Set(numbered.map((cell) => cell.cropKey));
	const rest = cells.filter((cell) => !named.has(cell.cropKey) && cell.cropKey !== "all");
	const all = cells.filter((cell) => cell.cropKey === "all" && lookOf(cell) !== "no_figure");
	return [...numbered, ...rest.toSorted((a, b) => a.cropKey.localeCompare(b.cropKey)), ...all];
}

/**
 * Losses to single causes, told like the whole loss as shares of one normal crop. Other measures have no parts, and how many
 * operations lost everything is a share of operations, not of the crop.
 */
export function partsOfLoss(whole: ReleaseMeasure, measures: ReleaseMeasure[]): ReleaseMeasure[] {
	if (whole.key !== "crop_loss") return [];
	return measures.filter(
		({ key, unit }) => key.endsWith("_loss") && key !== whole.key && key !== "total_loss" && unit === whole.unit,
	);
}

/** Numbers first, by size; then what has none, by name. "All crops" is no crop, and a crop of which nothing was asked is left out. */
export function drawnOrder<C extends CropCell>(measure: ReleaseMeasure, cells: C[]): CropCell[] {
	const numbered = worstFirst(measure, cells);
	const rest = cells.filter(
		(cell) =>
			cell.cropKey !== "all" &&
			!numbered.some(({ cropKey, areaKey }) => cropKey === cell.cropKey && areaKey === cell.areaKey) &&
			(cell.status === "withheld" || cell.steadiness === "rough"),
	);
	return [...numbered, ...rest];
}
