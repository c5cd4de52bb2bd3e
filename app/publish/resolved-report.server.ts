import type { Cell, CropCell, MapCell } from "./cell.ts";
import { addressKey, findCells, listCells, listCropCells } from "./cells.server.ts";
import type { MapClass } from "./classes.ts";
import { mapFiguresOf } from "./figures.server.ts";
import { cropRows } from "./finding.ts";
import { type Picture, pictureOf } from "./picture.server.ts";
import type { Release, ReleaseMeasure } from "./release.ts";
import { findReleaseById, listAreas, listCoveredStates, listMeasures } from "./releases.server.ts";
import { type ListedReport, listPublishedReports } from "./reports.server.ts";
import {
	type Block,
	type CautionKey,
	type DraftWords,
	partsOf,
	type Reference,
	referencesOf,
	type ReportContent,
} from "./report.ts";

type Told = Pick<ReleaseMeasure, "label" | "unit" | "decimals" | "season" | "hue">;
/** A figure looked up; null where the release holds no such figure. */
export type ResolvedFigure = { measure: Told; cell: CropCell } | null;
export type ResolvedPart = { kind: "text"; text: string } | { kind: "figure"; figure: ResolvedFigure };
export type ResolvedWords = { en: ResolvedPart[]; es: ResolvedPart[] };
export type ResolvedBlock =
	| { id: string; type: "heading" | "text"; text: ResolvedWords }
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
	| { id: string; type: "caution"; key: CautionKey }
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
	const [measures, found, states] = await Promise.all([
		listMeasures(release.releaseId),
		findCells(release.releaseId, referencesOf(content)),
		listCoveredStates(release.releaseId),
	]);
	const source = { release, measures: new Map(measures.map((measure) => [measure.key, measure])), found };
	return {
		title: resolveWords(content.title, source),
		summary: resolveWords(content.summary, source),
		blocks: await Promise.all(content.blocks.map((block) => resolveBlock(block, source))),
		season: release.season,
		picture: content.blocks.some((block) => block.type === "map") ? pictureOf(states) : null,
	};
}

type Source = { release: Release; measures: Map<string, ReleaseMeasure>; found: Record<string, CropCell> };

async function resolveBlock(block: Block, source: Source): Promise<ResolvedBlock> {
	const { id } = block;
	if (block.type === "caution") return { id, type: "caution", key: block.key };
	if (block.type === "heading" || block.type === "text")
		return { id, type: block.type, text: resolveWords(block.text, source) };
	if (block.type === "figure") return { id, type: "figure", figure: resolveFigure(block, source) };
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
			part.kind === "text" ? part : { kind: "figure", figure: resolveFigure(part.reference, source) },
		);
	return { en: resolve(en), es: resolve(es) };
}

function resolveFigure(reference: Reference, { measures, found }: Source): ResolvedFigure {
	const measure = measures.get(reference.measure);
	const cell = found[addressKey(reference)];
	return measure && cell ? { measure: told(measure), cell } : null;
}

const told = ({ label, unit, decimals, season, hue }: ReleaseMeasure): Told => ({ label, unit, decimals, season, hue });

/** A published report as a list tells of it: its title and summary with their figures looked up. */
export type ToldReport = Omit<ListedReport, "title" | "summary"> & { title: ResolvedWords; summary: ResolvedWords };

/** Published reports, the latest first; at most so many. */
export async function listToldReports(most = Infinity): Promise<ToldReport[]> {
	const reports = (await listPublishedReports()).slice(0, most);
	const resolved = reports.map(async (report): Promise<ToldReport[]> => {
		const release = await findReleaseById(report.releaseId);
		if (!release) return [];
		const { title, summary } = await resolveReport({ ...report, blocks: [] }, release);
		return [{ ...report, title, summary }];
	});
	return (await Promise.all(resolved)).flat();
}
