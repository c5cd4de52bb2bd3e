import type { Cell, CropCell } from "./cell.ts";
import { addressKey, findCells, listCells, listCropCells } from "./cells.server.ts";
import { drawnOrder, isOfAllAlone, partsOfLoss } from "./finding.ts";
import type { ReleaseMeasure } from "./release.ts";
import type { Block } from "./report.ts";
import { findSeasons, type SeasonCell, type Source, told, type Told } from "./report-source.server.ts";

type Area = Pick<Cell, "areaKey" | "areaName" | "kind">;
/** One chart with all of its figures. `worse` says which end is bad news. */
export type ResolvedChart =
	| { chart: "crops"; measure: Told; worse: ReleaseMeasure["worse"]; area: Area; rows: CropCell[] }
	| { chart: "areas"; measure: Told; worse: ReleaseMeasure["worse"]; cropKey: string; kind: string; rows: Cell[] }
	| { chart: "seasons"; measure: Told; cropKey: string; area: Area; rows: SeasonCell[] }
	| { chart: "windows"; measures: Told[]; area: Area; rows: { cropKey: string; cells: (CropCell | null)[] }[] }
	| {
			chart: "causes";
			measure: Told;
			parts: Told[];
			area: Area;
			rows: { cropKey: string; whole: CropCell; parts: (CropCell | null)[] }[];
	  };

type ChartBlock = Extract<Block, { type: "chart" }>;

/** Looks up what one chart shows; null where the release holds nothing of it. */
export async function resolveChart(block: ChartBlock, source: Source): Promise<ResolvedChart | null> {
	const measure = source.measures.get(block.measure);
	if (!measure) return null;
	if (block.chart === "areas") return areasChart(block, measure, source);
	if (block.chart === "seasons") return seasonsChart(block, measure, source);
	const cells = await listCropCells(source.release.releaseId, measure.key, block.area);
	const area = cells[0] && areaOf(cells[0]);
	if (!area || isOfAllAlone(cells)) return null;
	if (block.chart === "windows") return windowsChart(block, area, cells, source);
	const rows = drawnOrder(measure, cells);
	if (rows.length === 0) return null;
	if (block.chart === "crops") return { chart: "crops", measure: told(measure), worse: measure.worse, area, rows };
	return causesChart(block, measure, area, [...rows, ...cells.filter(({ cropKey }) => cropKey === "all")], source);
}

async function areasChart(block: ChartBlock, measure: ReleaseMeasure, source: Source): Promise<ResolvedChart | null> {
	const cells = await listCells(source.release.releaseId, measure.key, block.crop, block.kind);
	const rows = drawnOrder(
		measure,
		cells.map((cell) => ({ ...cell, cropKey: "" })),
	);
	if (rows.length === 0) return null;
	const { crop: cropKey, kind } = block;
	return { chart: "areas", measure: told(measure), worse: measure.worse, cropKey, kind, rows };
}

async function seasonsChart(block: ChartBlock, measure: ReleaseMeasure, source: Source): Promise<ResolvedChart | null> {
	const address = { measure: measure.key, crop: block.crop, area: block.area };
	const [now, earlier] = await Promise.all([
		findCells(source.release.releaseId, [address]),
		findSeasons(source.release, [address]),
	]);
	const key = addressKey(address);
	const cell = now[key];
	if (!cell) return null;
	const rows = [...(earlier[key] ?? []).toReversed(), { season: source.release.season, cell }];
	return { chart: "seasons", measure: told(measure), cropKey: block.crop, area: areaOf(cell), rows };
}

/** Every measure of days that the release has, in its order: first bloom, full bloom, petal fall. */
async function windowsChart(
	block: ChartBlock,
	area: Area,
	firsts: CropCell[],
	source: Source,
): Promise<ResolvedChart | null> {
	const days = [...source.measures.values()].filter(({ kind }) => kind === "day");
	const [leading] = days;
	if (!leading || days.length < 2) return null;
	const crops = firsts.map(({ cropKey }) => cropKey).filter((crop) => crop !== "all");
	const found = await findCells(
		source.release.releaseId,
		days.flatMap(({ key }) => crops.map((crop) => ({ measure: key, crop, area: block.area }))),
	);
	const at = (measure: string, crop: string) => found[addressKey({ measure, crop, area: block.area })] ?? null;
	const ordered = drawnOrder(
		leading,
		crops.flatMap((crop) => at(leading.key, crop) ?? []),
	);
	const rows = ordered.map(({ cropKey }) => ({ cropKey, cells: days.map(({ key }) => at(key, cropKey)) }));
	return rows.length === 0 ? null : { chart: "windows", measures: days.map(told), area, rows };
}

/** A loss with the parts of it that have measures of their own, crop by crop where it was asked so, else of all crops together. */
async function causesChart(
	block: ChartBlock,
	measure: ReleaseMeasure,
	area: Area,
	wholes: CropCell[],
	source: Source,
): Promise<ResolvedChart | null> {
	const parts = partsOfLoss(measure, [...source.measures.values()]);
	if (parts.length === 0) return null;
	const found = await findCells(
		source.release.releaseId,
		parts.flatMap(({ key }) => wholes.map(({ cropKey }) => ({ measure: key, crop: cropKey, area: block.area }))),
	);
	const partsOf = (cropKey: string) =>
		parts.map(({ key }) => found[addressKey({ measure: key, crop: cropKey, area: block.area })] ?? null);
	const isOnce = isOfAllAlone(wholes.flatMap(({ cropKey }) => partsOf(cropKey).flatMap((cell) => cell ?? [])));
	const rows = wholes
		.filter(({ cropKey }) => (cropKey === "all") === isOnce)
		.map((whole) => ({ cropKey: whole.cropKey, whole, parts: partsOf(whole.cropKey) }));
	if (rows.length === 0) return null;
	return { chart: "causes", measure: told(measure), parts: parts.map(told), area, rows };
}

const areaOf = ({ areaKey, areaName, kind }: Cell): Area => ({ areaKey, areaName, kind });
