import { type AreaKind, type Cell, lookOf, type MapCell } from "./cell.ts";
import { listCells } from "./cells.server.ts";
import { classesOfCells, classOf, type MapClass } from "./classes.ts";
import type { Release, ReleaseMeasure } from "./release.ts";
import { findRelease, listAreas, listMeasures } from "./releases.server.ts";

export type MapFigures = {
	release: Release;
	measure: ReleaseMeasure;
	cropKey: string;
	kind: AreaKind;
	cells: MapCell[];
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
	const measures = await listMeasures(release.releaseId);
	const measure = measures.find(({ key }) => key === measureKey);
	return measure && mapFiguresOf(release, measure, cropKey, kind);
}

export async function mapFiguresOf(
	release: Release,
	measure: ReleaseMeasure,
	cropKey: string,
	kind: AreaKind,
): Promise<MapFigures | undefined> {
	const [counties, cells] = await Promise.all([
		listAreas(release.releaseId, "county"),
		listCells(release.releaseId, measure.key, cropKey, kind),
	]);
	if (cells.length === 0) return undefined;
	const classes = classesOfCells(cells, measure.decimals);
	const drawnAreas = new Set(cells.map((cell) => cell.areaKey));
	const areaOfCounty = counties.map((county) => {
		const areaKey = kind === "district" ? county.parentKey : county.key;
		// A county without a district hangs on its state, which is not drawn.
		return [county.key, kind === "county" || (areaKey && drawnAreas.has(areaKey)) ? areaKey : null];
	});
	return {
		release,
		measure,
		cropKey,
		kind,
		classes,
		cells: cells.map((cell) => drawn(cell, classes, measure.decimals)),
		areaOfCounty: Object.fromEntries(areaOfCounty),
	};
}

function drawn(cell: Cell, classes: MapClass[], decimals: number): MapCell {
	const look = lookOf(cell);
	return { ...cell, look, classIndex: look === "number" ? classOf(cell.value, classes, decimals) : null };
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
		cells: cells.map(withoutBlanks),
		areaOfCounty,
	});
}

function withoutBlanks(cell: MapCell): Partial<MapCell> {
	return Object.fromEntries(Object.entries(cell).filter(([, value]) => value !== null));
}
