import { type AreaKind, type Cell, lookOf, type MapCell } from "./cell.ts";
import { listCells } from "./cells.server.ts";
import { type ClassWay, haveMiddle } from "./class-steps.ts";
import { classesOfCells, classOf, type MapClass } from "./classes.ts";
import type { Hue, Release, ReleaseMeasure } from "./release.ts";
import { findRelease, listAreas, listMeasures } from "./releases.server.ts";

export type MapFigures = {
	release: Release;
	measure: ReleaseMeasure;
	cropKey: string;
	kind: AreaKind;
	cells: MapCell[];
	/** From the shown values alone. */
	classes: MapClass[];
	way: ClassWay;
	/** The measure's own, or two hues that part in the middle where fixed classes lie on both sides of one. */
	hue: Hue | "normal";
	/** Which cell each county is drawn from: itself, or its district. Null: the county is in no district. */
	areaOfCounty: Record<string, string | null>;
};

/**
 * Everything one map and its table are made of, or undefined when the release holds no such figures.
 * @param beside the release of the map beside it, whose values share the classes.
 */
export async function findMapFigures(
	number: number,
	measureKey: string,
	cropKey: string,
	kind: AreaKind,
	{ beside, way }: { beside?: number; way?: ClassWay } = {},
): Promise<MapFigures | undefined> {
	const [release, other] = await Promise.all([findRelease(number), beside ? findRelease(beside) : undefined]);
	const measure = release && (await findMeasure(release, measureKey));
	if (!release || !measure) return undefined;
	if (beside === undefined) return mapFiguresOf(release, measure, cropKey, kind, way);
	return other && (await pairFiguresOf(release, measure, other, cropKey, kind, way))?.[0];
}

export async function mapFiguresOf(
	release: Release,
	measure: ReleaseMeasure,
	cropKey: string,
	kind: AreaKind,
	way: ClassWay = "natural",
): Promise<MapFigures | undefined> {
	const read = await readFigures(release, measure, cropKey, kind);
	return read && drawnWith(read, classesOfCells(read.cells, measure, way), way);
}

/**
 * Two releases' figures of one measure in the same classes, so that one colour is one range on both maps; undefined where
 * either holds none, or where they are told in other units or were withdrawn.
 */
export async function pairFiguresOf(
	release: Release,
	measure: ReleaseMeasure,
	other: Release,
	cropKey: string,
	kind: AreaKind,
	way: ClassWay = "natural",
): Promise<[MapFigures, MapFigures] | undefined> {
	if (release.withdrawn || other.withdrawn || release.number === other.number) return undefined;
	const otherMeasure = await findMeasure(other, measure.key);
	if (otherMeasure?.unit !== measure.unit || otherMeasure.decimals !== measure.decimals) return undefined;
	const [read, otherRead] = await Promise.all([
		readFigures(release, measure, cropKey, kind),
		readFigures(other, otherMeasure, cropKey, kind),
	]);
	if (!read || !otherRead) return undefined;
	const classes = classesOfCells([...read.cells, ...otherRead.cells], measure, way);
	return [drawnWith(read, classes, way), drawnWith(otherRead, classes, way)];
}

async function findMeasure(release: Release, measureKey: string): Promise<ReleaseMeasure | undefined> {
	return (await listMeasures(release.releaseId)).find(({ key }) => key === measureKey);
}

type Read = Omit<MapFigures, "cells" | "classes" | "way" | "hue"> & { cells: Cell[] };

async function readFigures(
	release: Release,
	measure: ReleaseMeasure,
	cropKey: string,
	kind: AreaKind,
): Promise<Read | undefined> {
	const [counties, cells] = await Promise.all([
		listAreas(release.releaseId, "county"),
		listCells(release.releaseId, measure.key, cropKey, kind),
	]);
	if (cells.length === 0) return undefined;
	const drawnAreas = new Set(cells.map((cell) => cell.areaKey));
	const areaOfCounty = counties.map((county) => {
		const areaKey = kind === "district" ? county.parentKey : county.key;
		// A county without a district hangs on its state, which is not drawn.
		return [county.key, kind === "county" || (areaKey && drawnAreas.has(areaKey)) ? areaKey : null];
	});
	return { release, measure, cropKey, kind, cells, areaOfCounty: Object.fromEntries(areaOfCounty) };
}

/** In classes that may be those of more figures than these; each class counts only its own areas here. */
function drawnWith(read: Read, classes: MapClass[], way: ClassWay): MapFigures {
	const cells = read.cells.map((cell) => drawn(cell, classes, read.measure.decimals));
	const counted = classes.map((range, index) => ({
		...range,
		count: cells.filter(({ classIndex }) => classIndex === index).length,
	}));
	const hue = way === "fixed" && haveMiddle(read.measure.unit) ? "normal" : read.measure.hue;
	return { ...read, cells, classes: counted, way, hue };
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
