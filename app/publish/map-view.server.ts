import type { CropCell } from "./cell.ts";
import { addressKey, findCells } from "./cells.server.ts";
import { type MapFigures, mapFiguresOf, pairFiguresOf } from "./figures.server.ts";
import { choose, type MapQuery } from "./map-choice.ts";
import type { Release, ReleaseMeasure } from "./release.ts";
import { findRelease, listCoveredStates, listCrops, listMeasures, listReleases } from "./releases.server.ts";

/** What one address of the map shows: the same for the page, its pictures and its file. */
export type MapView = {
	/** Of the chosen release; in the classes that it shares with the other, where there are two. */
	figures: MapFigures;
	/** The chosen release and the one beside it, the earlier season first. */
	pair: [earlier: MapFigures, later: MapFigures] | null;
	measures: ReleaseMeasure[];
	crops: string[];
	/** Those that can be chosen: what stands, and the one that was asked for. */
	releases: Release[];
	states: string[];
	/** The state that the view is zoomed to. */
	state: string | null;
	/** Another measure or crop was asked for than the release has. */
	changed: boolean;
	/** The release beside it was asked for and cannot stand there. */
	besideMissing: boolean;
};
export type NoView = "no_release" | "not_found" | "no_figures" | { withdrawn: number };

/** Looks up what an address of the map shows, or why it shows nothing. */
export async function findMapView(query: MapQuery): Promise<MapView | NoView> {
	const standing = await listReleases();
	const release = query.release ? await findRelease(query.release) : standing[0];
	if (!release) return query.release ? "not_found" : "no_release";
	if (release.withdrawn) return { withdrawn: release.number };
	const measures = await listMeasures(release.releaseId);
	const chosen = choose(
		query.measure,
		measures.map(({ key }) => key),
	);
	const measure = measures.find(({ key }) => key === chosen.key);
	if (!measure) return "no_figures";
	const crops = await listCrops(release.releaseId, measure.key);
	const crop = choose(query.crop, crops);
	const [alone, states] = await Promise.all([
		mapFiguresOf(release, measure, crop.key ?? "all", query.kind, query.classes),
		listCoveredStates(release.releaseId),
	]);
	if (!alone) return "no_figures";
	const pair = await pairOf(release, measure, alone.cropKey, query);
	return {
		figures: pair?.find((figures) => figures.release.number === release.number) ?? alone,
		pair,
		measures,
		crops,
		releases: release.replacedBy ? [release, ...standing] : standing,
		states,
		state: states.find((state) => state === query.state) ?? null,
		changed: chosen.changed || crop.changed,
		besideMissing: Boolean(query.beside) && !pair && query.beside !== release.number,
	};
}

export const isView = (found: MapView | NoView): found is MapView => typeof found === "object" && "figures" in found;

/** The chosen release and the other that is asked for; null where they cannot stand beside each other. */
async function pairOf(
	release: Release,
	measure: ReleaseMeasure,
	cropKey: string,
	{ beside, kind, classes }: MapQuery,
): Promise<MapView["pair"]> {
	const other = beside ? await findRelease(beside) : undefined;
	const figures = other && (await pairFiguresOf(release, measure, other, cropKey, kind, classes));
	return figures ? (figures.toSorted(bySeason) as [MapFigures, MapFigures]) : null;
}

const bySeason = ({ release: a }: MapFigures, { release: b }: MapFigures) => a.season - b.season || a.number - b.number;

/** The figure of the whole network, or of the state that a view is zoomed to, in each of its seasons; none where one lacks it. */
export async function listWholeFigures({
	figures,
	pair,
	state,
}: MapView): Promise<{ season: number; cell: CropCell }[]> {
	const found = await Promise.all(
		(pair ?? [figures]).map(async ({ release, measure, cropKey }) => {
			const address = { measure: measure.key, crop: cropKey, area: state ?? "network" };
			const cell = (await findCells(release.releaseId, [address]))[addressKey(address)];
			return cell ? [{ season: release.season, cell }] : [];
		}),
	);
	return found.every(([whole]) => whole) ? found.flat() : [];
}
