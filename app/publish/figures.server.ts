import type { AreaKind, Cell } from "./cell.ts";
import { listCells } from "./cells.server.ts";
import { classesOfCells, type MapClass } from "./classes.ts";
import type { Release, ReleaseMeasure } from "./release.ts";
import { findRelease, listAreas, listMeasures } from "./releases.server.ts";

export type MapFigures = {
	release: Release;
	measure: ReleaseMeasure;
	cropKey: string;
	kind: AreaKind;
	cells: Cell[];
	/** From the shown values alone. */
	classes: MapClass[];
	/** Which cell each county is drawn from: itself, or its district. Null: the county is in no district. */
	areaOfCounty: Record<string, string | null>;
};

/** Everything one map and its table are made of, or undefined when the release holds no such figures. */
export async function findMapFigures(
	number: number,
	measureKey: string,
	cropKey: string,
	kind: AreaKind,
): Promise<MapFigures | undefined> {
	const release = await findRelease(number);
	if (!release) return undefined;
	const [measures, counties, cells] = await Promise.all([
		listMeasures(release.releaseId),
		listAreas(release.releaseId, "county"),
		listCells(release.releaseId, measureKey, cropKey, kind),
	]);
	const measure = measures.find(({ key }) => key === measureKey);
	if (!measure || cells.length === 0) return undefined;
	const areaOfCounty = Object.fromEntries(
		counties.map((county) => [county.key, kind === "district" ? county.parentKey : county.key]),
	);
	return { release, measure, cropKey, kind, cells, classes: classesOfCells(cells, measure.decimals), areaOfCounty };
}

/** What the map's own code fetches: figures by area, and no number beside an area that shows none. */
export function figuresBody({ release, measure, cropKey, kind, cells, classes, areaOfCounty }: MapFigures): string {
	return JSON.stringify({
		release: release.number,
		season: release.season,
		measure: measure.key,
		crop: cropKey,
		kind,
		unit: measure.unit,
		decimals: measure.decimals,
		classes,
		cells: cells.map((cell) => ({
			areaKey: cell.areaKey,
			areaName: cell.areaName,
			stateFips: cell.stateFips,
			status: cell.status,
			...(cell.steadiness && {
				steadiness: cell.steadiness,
				value: cell.value,
				lower: cell.lower,
				upper: cell.upper,
			}),
			...(cell.respondentsBand && { respondentsBand: cell.respondentsBand }),
		})),
		areaOfCounty: kind === "county" ? undefined : areaOfCounty,
	});
}
