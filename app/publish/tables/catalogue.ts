import { type AreaKind, areaKinds } from "../cell.ts";
import type { Release, ReleaseArea, ReleaseMeasure } from "../release.ts";
import type { TableSelection } from "./selection.ts";

export type TableRelease = Pick<
	Release,
	"number" | "season" | "title" | "formKey" | "seriesId" | "rules" | "codeVersion" | "replacedBy" | "withdrawn"
>;
/** An area with what holds it, release by release: its name is that of the latest. A release that is not named lacks it. */
export type TableArea = Omit<ReleaseArea, "parentKey"> & { liesIn: Record<number, string | null> };

/** What a table can be built from: codes and names of releases, and no figure. */
export type TableCatalogue = {
	/** The latest season first. */
	releases: TableRelease[];
	/** Whether editions that were replaced are offered too, and not only where one was asked for by number. */
	revisions: boolean;
	measures: Record<number, ReleaseMeasure[]>;
	crops: Record<number, string[]>;
	/** From the whole network to counties, each kind by key. */
	areas: TableArea[];
};

/** Measures of the releases by key, each as the latest release that has it tells it. */
export function measuresOf(catalogue: TableCatalogue, releases: readonly number[]): Map<string, ReleaseMeasure> {
	const measures = new Map<string, ReleaseMeasure>();
	for (const { number } of catalogue.releases.filter((release) => releases.includes(release.number)))
		for (const measure of catalogue.measures[number] ?? [])
			if (!measures.has(measure.key)) measures.set(measure.key, measure);
	return measures;
}

/** Crops of the releases, all crops together first. */
export function cropsOf({ crops }: TableCatalogue, releases: readonly number[]): string[] {
	const keys = new Set(releases.flatMap((number) => crops[number] ?? []));
	return [...keys].toSorted((a, b) => Number(b === "all") - Number(a === "all") || (a < b ? -1 : 1));
}

export const isIn = ({ liesIn }: TableArea, releases: readonly number[]): boolean =>
	releases.some((number) => number in liesIn);

/** The areas that are chosen, by level or by name, out of those of the chosen releases. */
export function chosenAreas({ areas }: TableCatalogue, selection: TableSelection): TableArea[] {
	const named = new Set(selection.area);
	const [kinds, states] = [new Set<string>(selection.kind), new Set(selection.state)];
	const ofLevel = ({ kind, stateFips }: TableArea) =>
		kinds.has(kind) && (states.size === 0 || stateFips === null || states.has(stateFips));
	return areas.filter((area) => isIn(area, selection.release) && (named.has(area.key) || ofLevel(area)));
}

/** What of the choice one release has: the codes that it knows, which is what it can be asked for. */
export function partOf(catalogue: TableCatalogue, selection: TableSelection, release: number) {
	const measures = new Set((catalogue.measures[release] ?? []).map(({ key }) => key));
	const crops = new Set(catalogue.crops[release] ?? []);
	return {
		measures: selection.measure.filter((key) => measures.has(key)),
		crops: selection.crop.filter((key) => crops.has(key)),
		areas: chosenAreas(catalogue, selection).filter((area) => isIn(area, [release])),
	};
}

/** As many cells as the choice can have at most: a release need not have a cell for every crop in every area. */
export function countCells(catalogue: TableCatalogue, selection: TableSelection): number {
	return selection.release
		.map((number) => partOf(catalogue, selection, number))
		.reduce((sum, { measures, crops, areas }) => sum + measures.length * crops.length * areas.length, 0);
}

/** Wide areas first. */
export const kindOrder: readonly AreaKind[] = areaKinds.toReversed();
