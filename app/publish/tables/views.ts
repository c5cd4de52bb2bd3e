import { groupBy } from "#app/lib/group-by.ts";
import { type AreaKind, type CropCell, lookOf, type MapCell } from "../cell.ts";
import { classesOfCells, classOf, type MapClass } from "../classes.ts";
import type { DataRecord } from "../data-file.ts";
import { drawnOrder } from "../finding.ts";
import type { ReleaseMeasure } from "../release.ts";
import type { ResolvedChart } from "../resolved-chart.server.ts";
import { isIn, type TableCatalogue } from "./catalogue.ts";
import { addressOf } from "./layout.ts";
import { tableLimits } from "./limits.ts";
import { tableDimensions } from "./selection.ts";

const statuses = { A: "shown", N: "shown", O: "shown", Q: "withheld", M: "no_growers" } as const;

/** A row of the files as the cell that it was made of, for what draws cells. */
export function toCell(record: DataRecord): CropCell {
	const { first_quartile: first, third_quartile: third } = record;
	return {
		areaKey: record.area_code,
		areaName: record.area_name,
		kind: record.area_kind as AreaKind,
		stateFips: record.state_code,
		cropKey: record.crop,
		status: statuses[record.status],
		value: record.value,
		lower: record.lower,
		upper: record.upper,
		quartiles: first === null || third === null ? null : { first, third },
		steadiness: record.steadiness as CropCell["steadiness"],
		respondentsBand: record.respondents_band,
	};
}

export const measureOf = ({ measures }: TableCatalogue, record: DataRecord): ReleaseMeasure | undefined =>
	measures[record.release]?.find(({ key }) => key === record.measure);

export type TableChart = {
	/** The season or crop that it is of, where there are several. */
	key: string;
	drawn: Extract<ResolvedChart, { chart: "crops" | "areas" | "seasons" }>;
	season: number;
};
/** Why a table has no chart: too much varies in it, nothing does, or it has too many lines. */
export type NoChart = "several" | "single" | "many";

/**
 * The charts that suit a table: crops as bars, areas as dots, or seasons as a line, whichever alone varies in it. Where two
 * vary, it is a chart a season, or a chart a crop, the latest and first chosen first.
 */
export function chartsOf(catalogue: TableCatalogue, records: readonly DataRecord[]): TableChart[] | NoChart {
	const [first] = records;
	const measure = first && measureOf(catalogue, first);
	if (!first || !measure) return "single";
	const varied = tableDimensions.filter((one) => new Set(records.map((record) => addressOf(record)[one])).size > 1);
	if (varied.length === 0) return "single";
	if (varied.length > 2 || varied.includes("measure")) return "several";
	if (records.length > tableLimits.drawn) return "many";
	// By the order of the dimensions, seasons come before crops and crops before areas.
	const varies = varied.at(-1) as "season" | "crop" | "area";
	const apart = varied.length === 2 ? varied[0]! : null;
	const parts = apart ? [...groupBy(records, (record) => addressOf(record)[apart]).values()] : [records];
	if (apart === "season") parts.sort(([a], [b]) => b!.season - a!.season || b!.release - a!.release);
	const charts = parts.flatMap((part) => {
		const drawn = drawnOf(varies, catalogue, part, measureOf(catalogue, part[0]!) ?? measure);
		return drawn ? [{ key: apart ? addressOf(part[0]!)[apart] : "", drawn, season: part[0]!.season }] : [];
	});
	return charts.length > 0 ? charts : "several";
}

function drawnOf(
	varies: "season" | "crop" | "area",
	catalogue: TableCatalogue,
	records: readonly DataRecord[],
	measure: ReleaseMeasure,
): TableChart["drawn"] | null {
	const cells = records.map(toCell);
	const [first] = cells;
	const { cropKey, kind } = first!;
	if (varies === "crop") {
		const rows = drawnOrder(measure, cells);
		return rows.length === 0 ? null : { chart: "crops", measure, worse: measure.worse, area: first!, rows };
	}
	if (varies === "area") {
		// Ordered as crops are; here there is one crop, which may be all of them.
		const rows = drawnOrder(
			measure,
			cells.map((cell) => ({ ...cell, cropKey: "" })),
		);
		const ofOneKind = cells.every((cell) => cell.kind === kind);
		if (rows.length === 0 || !ofOneKind) return null;
		return { chart: "areas", measure, worse: measure.worse, cropKey, kind, rows };
	}
	const rows = records
		.map((record) => ({ season: record.season, cell: toCell(record), shape: measureOf(catalogue, record) }))
		.toSorted((a, b) => a.season - b.season);
	const alike = rows.every(({ shape }) => shape?.unit === measure.unit && shape.decimals === measure.decimals);
	if (!alike || new Set(rows.map(({ season }) => season)).size < rows.length) return null;
	const latest = { ...measure, season: rows.at(-1)!.season };
	return { chart: "seasons", measure: latest, cropKey, area: first!, rows };
}

export type TableMap = {
	release: number;
	measure: ReleaseMeasure;
	cropKey: string;
	kind: "county" | "district";
	cells: MapCell[];
	classes: MapClass[];
	/** Which cell each county is drawn from. */
	areaOfCounty: Record<string, string | null>;
};

/** The map of a table of one figure, crop and season over counties or districts; null for any other. */
export function mapOf(catalogue: TableCatalogue, records: readonly DataRecord[]): TableMap | null {
	const [first] = records;
	const measure = first && measureOf(catalogue, first);
	if (!first || !measure || (first.area_kind !== "county" && first.area_kind !== "district")) return null;
	const { release, area_kind: kind } = first;
	const alike = (record: DataRecord) =>
		record.release === release &&
		record.measure === first.measure &&
		record.crop === first.crop &&
		record.area_kind === kind;
	if (!records.every(alike)) return null;
	const cells = records.map(toCell);
	const classes = classesOfCells(cells, measure);
	const counties = catalogue.areas.filter((area) => area.kind === "county" && isIn(area, [release]));
	return {
		release,
		measure,
		kind,
		classes,
		cropKey: first.crop,
		cells: cells.map((cell) => {
			const look = lookOf(cell);
			return { ...cell, look, classIndex: look === "number" ? classOf(cell.value, classes, measure.decimals) : null };
		}),
		areaOfCounty: Object.fromEntries(
			counties.map(({ key, liesIn }) => [key, kind === "county" ? key : (liesIn[release] ?? null)]),
		),
	};
}
