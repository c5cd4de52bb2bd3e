import type { Cell, CropCell, MapCell } from "./cell.ts";
import { missingCautions } from "./cautions.ts";
import { listCells, listCropCells } from "./cells.server.ts";
import type { MapClass } from "./classes.ts";
import { mapFiguresOf } from "./figures.server.ts";
import { cropRows } from "./finding.ts";
import { parseMarkdown, type Passage, withFigures } from "./markdown.ts";
import { type Picture, pictureOf } from "./picture.server.ts";
import type { Release, ReleaseMeasure } from "./release.ts";
import { findReleaseById, listAreas, listCoveredStates } from "./releases.server.ts";
import { type EarlierFigure, lookUp, readSource, type Source, told, type Told } from "./report-source.server.ts";
import { type ListedReport, listPublishedReports, listVersions } from "./reports.server.ts";
import { listShownPhotos, type PhotoSize, type ShownPhoto } from "./report-photo.server.ts";
import type { PhotoTakenAway } from "./report-photo.ts";
import { type Block, type CautionKey, type DraftWords, partsOf, photosOf, type ReportContent } from "./report.ts";
import { resolveChart, type ResolvedChart } from "./resolved-chart.server.ts";

/** A figure looked up; null where the release holds no such figure. Of the season before, its measure has that season. */
export type ResolvedFigure = { measure: Told; cell: CropCell; earlier?: EarlierFigure } | { count: number } | null;
export type ResolvedPart = { kind: "text"; text: string } | { kind: "figure"; figure: ResolvedFigure };
export type ResolvedWords = { en: ResolvedPart[]; es: ResolvedPart[] };
export type ResolvedText = { en: Passage<ResolvedFigure>[]; es: Passage<ResolvedFigure>[] };
export type ResolvedBlock =
	| { id: string; type: "heading"; text: ResolvedWords }
	| { id: string; type: "text"; text: ResolvedText }
	| { id: string; type: "figure"; figure: ResolvedFigure }
	| {
			id: string;
			type: "map";
			measure: Told;
			cropKey: string;
			cells: MapCell[];
			classes: MapClass[];
			areaOfCounty: Record<string, string | null>;
	  }
	| { id: string; type: "table"; measure: Told; cropKey: string; kind: string; cells: Cell[] }
	| { id: string; type: "crops"; measure: Told; areaName: string; cells: CropCell[] }
	| { id: string; type: "chart"; drawn: ResolvedChart }
	| { id: string; type: "caution"; key: CautionKey }
	| { id: string; type: "photo"; photo: string; alt: DraftWords; size: PhotoSize | null }
	| { id: string; type: "photo_gone"; takenAway: PhotoTakenAway }
	| { id: string; type: "missing" };
export type ResolvedReport = {
	title: ResolvedWords;
	summary: ResolvedWords;
	blocks: ResolvedBlock[];
	season: number;
	picture: Picture | null;
};

/** A report with every reference looked up in its release, as the reader's role sees it. A withheld figure has no number. */
export async function resolveReport(content: ReportContent, release: Release): Promise<ResolvedReport> {
	const source = await readSource(content, release);
	const [states, photos] = await Promise.all([
		listCoveredStates(release.releaseId),
		listShownPhotos(photosOf(content)),
	]);
	return {
		title: resolveWords(content.title, source),
		summary: resolveWords(content.summary, source),
		blocks: [
			...(await Promise.all(content.blocks.map((block) => resolveBlock(block, source, photos)))),
			...missingCautions(content, [...source.measures.values()]).map((key): ResolvedBlock => ({
				id: `caution-${key}`,
				type: "caution",
				key,
			})),
		],
		season: release.season,
		picture: content.blocks.some((block) => block.type === "map") ? pictureOf(states) : null,
	};
}

async function resolveBlock(block: Block, source: Source, photos: Record<string, ShownPhoto>): Promise<ResolvedBlock> {
	const { id } = block;
	if (block.type === "photo") {
		const { photo, alt } = block;
		const { size = null, takenAway = null } = photos[photo] ?? {};
		if (takenAway) return { id, type: "photo_gone", takenAway };
		return photo ? { id, type: "photo", photo, alt, size } : { id, type: "missing" };
	}
	if (block.type === "caution") return { id, type: "caution", key: block.key };
	if (block.type === "heading") return { id, type: "heading", text: resolveWords(block.text, source) };
	if (block.type === "text") return { id, type: "text", text: resolveText(block.text, source) };
	if (block.type === "figure") return { id, type: "figure", figure: lookUp(block, source) };
	if (block.type === "chart") {
		const drawn = await resolveChart(block, source);
		return drawn ? { id, type: "chart", drawn } : { id, type: "missing" };
	}
	const measure = source.measures.get(block.measure);
	if (!measure) return { id, type: "missing" };
	return resolveTable(block, told(measure), measure, source.release);
}

async function resolveTable(
	block: Extract<Block, { type: "map" | "table" | "crops" }>,
	toldMeasure: Told,
	measure: ReleaseMeasure,
	release: Release,
): Promise<ResolvedBlock> {
	const { id } = block;
	if (block.type === "crops") {
		const cells = await listCropCells(release.releaseId, measure.key, block.area);
		const areaName = (await listAreas(release.releaseId)).find(({ key }) => key === block.area)?.name;
		if (!areaName) return { id, type: "missing" };
		return { id, type: "crops", measure: toldMeasure, areaName, cells: cropRows(measure, cells) };
	}
	if (block.type === "table") {
		const cells = await listCells(release.releaseId, measure.key, block.crop, block.kind);
		return { id, type: "table", measure: toldMeasure, cropKey: block.crop, kind: block.kind, cells };
	}
	const figures = await mapFiguresOf(release, measure, block.crop, "county");
	if (!figures) return { id, type: "missing" };
	const { cells, classes, areaOfCounty } = figures;
	return { id, type: "map", measure: toldMeasure, cropKey: block.crop, cells, classes, areaOfCounty };
}

function resolveWords({ en, es }: DraftWords, source: Source): ResolvedWords {
	const resolve = (text: string): ResolvedPart[] =>
		partsOf(text).map((part) =>
			part.kind === "text" ? part : { kind: "figure", figure: lookUp(part.reference, source) },
		);
	return { en: resolve(en), es: resolve(es) };
}

function resolveText({ en, es }: DraftWords, source: Source): ResolvedText {
	const resolve = (text: string) => withFigures(parseMarkdown(text), (reference) => lookUp(reference, source));
	return { en: resolve(en), es: resolve(es) };
}

/** A published report as a list tells of it: its title and summary with their figures looked up. */
export type ToldReport = Omit<ListedReport, "title" | "summary"> & {
	title: ResolvedWords;
	summary: ResolvedWords;
	/** ISO moment of its first version. */
	firstPublishedAt: string;
};

/** Published reports, the latest first; at most so many. */
export async function listToldReports(most = Infinity): Promise<ToldReport[]> {
	const reports = (await listPublishedReports()).slice(0, most);
	const resolved = reports.map(async (report): Promise<ToldReport[]> => {
		const release = await findReleaseById(report.releaseId);
		if (!release) return [];
		const { title, summary } = await resolveReport({ ...report, blocks: [] }, release);
		const first = report.version === 1 ? undefined : (await listVersions(report.slug)).at(-1);
		return [{ ...report, title, summary, firstPublishedAt: first?.publishedAt ?? report.publishedAt }];
	});
	return (await Promise.all(resolved)).flat();
}
