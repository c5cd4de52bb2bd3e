import { groupBy } from "#app/lib/group-by.ts";
import { type CropCell, lookOf } from "./cell.ts";
import { addressKey, countCells, findCells } from "./cells.server.ts";
import type { Release, ReleaseMeasure } from "./release.ts";
import { listMeasures, listReleases } from "./releases.server.ts";
import { cellCounts, type Reference, referencesOf, type ReportContent } from "./report.ts";
import type { ResolvedFigure } from "./resolved-report.server.ts";
import { reader } from "./reader.server.ts";

export type Told = Pick<ReleaseMeasure, "label" | "unit" | "decimals" | "season" | "hue">;
/** What a figure of earlier seasons is: that of one season, or the mean of those that have one. */
export type EarlierFigure = { of: "last" | "mean"; seasons: number[] };
/** One season's figure, of an earlier release of the same form. */
export type SeasonCell = { season: number; cell: CropCell };
export type Source = {
	release: Release;
	measures: Map<string, ReleaseMeasure>;
	found: Record<string, CropCell>;
	/** By address, the latest season first. */
	earlier: Record<string, SeasonCell[]>;
	/** By kind of area and status. */
	counts: Record<string, number>;
};

/** Everything that a report's texts point to, read at once. */
export async function readSource(content: ReportContent, release: Release): Promise<Source> {
	const references = referencesOf(content);
	const ofSeasons = references.filter(({ when }) => when);
	const kinds = new Set(references.filter(({ measure }) => measure === cellCounts).map(({ area }) => area));
	const [measures, found, earlier, ...counted] = await Promise.all([
		listMeasures(release.releaseId),
		findCells(release.releaseId, references),
		findEarlier(release, ofSeasons),
		...(["county", "district", "state"] as const).map(async (kind) => {
			const statuses: Record<string, number> = kinds.has(kind) ? await countCells(release.releaseId, kind) : {};
			return Object.entries(statuses).map(([status, count]) => [`${status}|${kind}`, count] as const);
		}),
	]);
	const byKey = new Map(measures.map((measure) => [measure.key, measure]));
	return { release, measures: byKey, found, earlier, counts: Object.fromEntries(counted.flat()) };
}

const mostSeasons = 5;

/** The standing releases of the same form in the five seasons before, the latest first, one a season. */
export async function listEarlierReleases({ formKey, season }: Release, db = reader()): Promise<Release[]> {
	const releases = (await listReleases(db)).filter(
		(one) => one.formKey === formKey && one.season < season && one.season >= season - mostSeasons,
	);
	const bySeason = groupBy(releases, (one) => one.season);
	return [...bySeason.values()].flatMap((ofSeason) => ofSeason[0] ?? []).toSorted((a, b) => b.season - a.season);
}

type Addresses = Omit<Reference, "when">[];

/** The same figures in the seasons before, where they had a number; a season without one is left out. */
export async function findEarlier(release: Release, addresses: Addresses, db = reader()) {
	const seasons = Object.entries(await findSeasons(release, addresses, db));
	return Object.fromEntries(
		seasons.map(([key, cells]) => [key, cells.filter(({ cell }) => lookOf(cell) === "number")]),
	);
}

/** The same in the seasons before whose releases have such a figure, shown or not, by address; the latest season first. */
export async function findSeasons(
	release: Release,
	addresses: Addresses,
	db = reader(),
): Promise<Record<string, SeasonCell[]>> {
	if (addresses.length === 0) return {};
	const releases = await listEarlierReleases(release, db);
	const seasons = await Promise.all(
		releases.map(async ({ releaseId, season }) => ({ season, cells: await findCells(releaseId, addresses, db) })),
	);
	return Object.fromEntries(
		addresses.map((address) => {
			const key = addressKey(address);
			const cells = seasons.flatMap(({ season, cells: of }) => (of[key] ? [{ season, cell: of[key] }] : []));
			return [key, cells];
		}),
	);
}

/** Looks one reference up among what was read; null where there is no such figure. */
export function lookUp(reference: Reference, source: Source): ResolvedFigure {
	if (reference.measure === cellCounts) {
		const count = source.counts[`${reference.crop}|${reference.area}`];
		return count === undefined ? null : { count };
	}
	const measure = source.measures.get(reference.measure);
	const key = addressKey(reference);
	if (!measure) return null;
	if (reference.when === "last") return lastOf(measure, source.earlier[key] ?? [], source.release.season);
	if (reference.when === "mean") return meanOf(measure, source.earlier[key] ?? []);
	const cell = source.found[key];
	return cell ? { measure: told(measure), cell } : null;
}

function lastOf(measure: ReleaseMeasure, seasons: SeasonCell[], season: number): ResolvedFigure {
	const last = seasons.find((one) => one.season === season - 1);
	if (!last) return null;
	return {
		measure: { ...told(measure), season: last.season },
		cell: last.cell,
		earlier: { of: "last", seasons: [last.season] },
	};
}

/** The plain mean of the seasons' figures; of one season alone there is none. Without an interval, which no release holds. */
function meanOf(measure: ReleaseMeasure, seasons: SeasonCell[]): ResolvedFigure {
	const [latest] = seasons;
	if (!latest || seasons.length < 2) return null;
	const sum = seasons.reduce((total, { cell }) => total + (cell.value ?? 0), 0);
	const nothing = { lower: null, upper: null, quartiles: null, respondentsBand: null };
	const careful = seasons.some(({ cell }) => cell.steadiness !== "steady");
	return {
		measure: told(measure),
		cell: { ...latest.cell, ...nothing, value: sum / seasons.length, steadiness: careful ? "care" : "steady" },
		earlier: { of: "mean", seasons: seasons.map(({ season }) => season).toSorted((a, b) => a - b) },
	};
}

export const told = ({ label, unit, decimals, season, hue }: ReleaseMeasure): Told => ({
	label,
	unit,
	decimals,
	season,
	hue,
});
