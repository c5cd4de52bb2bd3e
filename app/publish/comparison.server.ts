import { type CropCell, lookOf } from "./cell.ts";
import { addressKey, findCells } from "./cells.server.ts";
import type { Release, ReleaseArea, ReleaseMeasure } from "./release.ts";
import { findReleaseById, listAreas, listMeasures } from "./releases.server.ts";

export type Wanted = { measureKey: string; cropKey: string };
/** Published figures around one county, each in the smallest area that shows it; null where none does. */
export type Comparison = {
	release: Release;
	measures: ReleaseMeasure[];
	cells: Record<string, CropCell & { value: number }>;
};

export const comparisonKey = ({ measureKey, cropKey }: Wanted) => `${measureKey}|${cropKey}`;

/**
 * The figures that stand beside a grower's own, read as any reader reads them: who is comparing changes nothing in what is
 * shown. The areas are those of the release, as it was made.
 */
export async function findComparison(
	releaseId: string,
	countyFips: string,
	wanted: Wanted[],
): Promise<Comparison | undefined> {
	const release = await findReleaseById(releaseId);
	if (!release) return undefined;
	const [measures, areas] = await Promise.all([listMeasures(releaseId), listAreas(releaseId)]);
	const around = areasAround(areas, countyFips);
	const told = new Set(measures.map(({ key }) => key));
	const asked = wanted.filter(({ measureKey }) => told.has(measureKey));
	const found = await findCells(
		releaseId,
		asked.flatMap(({ measureKey, cropKey }) =>
			around.map((area) => ({ measure: measureKey, crop: cropKey, area: area.key })),
		),
	);
	const cells: Comparison["cells"] = {};
	for (const one of asked) {
		const smallest = around
			.map((area) => found[addressKey({ measure: one.measureKey, crop: one.cropKey, area: area.key })])
			.find((cell): cell is CropCell & { value: number } => cell !== undefined && lookOf(cell) === "number");
		if (smallest) cells[comparisonKey(one)] = smallest;
	}
	return { release, measures, cells };
}

/** A county and what holds it, the smallest first. */
export function areasAround(areas: ReleaseArea[], countyFips: string): ReleaseArea[] {
	const byKey = new Map(areas.map((area) => [area.key, area]));
	const around: ReleaseArea[] = [];
	for (let area = byKey.get(countyFips); area && !around.includes(area);) {
		around.push(area);
		area = area.parentKey === null ? undefined : byKey.get(area.parentKey);
	}
	return around;
}
