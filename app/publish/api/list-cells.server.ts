import { sql } from "kysely";
import type { DataRow } from "../data-file.ts";
import { type DataRecord, toRecord } from "../data-file.ts";
import { reader } from "../reader.server.ts";
import type { Place } from "./cursor.server.ts";
import type { CellsQuery } from "./parameters.ts";

type Page = { rows: DataRecord[]; last: Place | null };

/**
 * A page of a release's rows in the order of its files. The place after which it begins is a whole sort key, so that a page
 * costs the same wherever it lies; a release never changes, so pages fit together however long one takes between them.
 */
export async function listCellPage(
	release: { releaseId: string; number: number; season: number },
	query: CellsQuery,
	after: Place | null,
): Promise<Page> {
	const found = await selectPage(release.releaseId, query, after).execute();
	const shown = found.slice(0, query.limit);
	const last = found.length > query.limit ? shown.at(-1)! : null;
	return {
		rows: shown.map((row) => toRecord(release, row as DataRow)),
		last: last && [last.position, last.cropKey, last.areaKind, last.areaKey],
	};
}

/**
 * Measure by measure, as the order has it, so that a page reads the cells of as many measures as it needs and no more: of
 * 33,000 rows the first thousand took 20 ms, and 200 ms where all were joined and sorted first. A figure is looked up by its
 * key for that, row by row; the limit of one keeps the planner from reading all figures into a hash instead.
 */
function selectPage(releaseId: string, query: CellsQuery, after: Place | null) {
	let measures = reader()
		.selectFrom("release.measure")
		.select(["measure_key", "position", "unit"])
		.where("release_id", "=", releaseId)
		.orderBy("position");
	if (query.measure) measures = measures.where("measure_key", "in", query.measure);
	if (after) measures = measures.where("position", ">=", Number(after[0]));
	const limit = query.limit + 1;
	let page = reader()
		.selectFrom(measures.as("m"))
		.innerJoinLateral(
			selectCells(releaseId, query, after)
				// A page of some statuses only is filled after these are known.
				.$if(!query.status, (cells) => cells.limit(limit))
				.as("c"),
			(join) => join.onTrue(),
		)
		.leftJoinLateral(figureOfRow(releaseId).as("f"), (join) => join.onTrue())
		.select(["m.position", "m.measure_key as measureKey", "m.unit"])
		.select(["c.cropKey", "c.areaKey", "c.areaKind", "c.areaName", "c.stateFips", "c.cellStatus", "c.respondentsBand"])
		.select([
			"f.value",
			"f.standard_error as standardError",
			"f.cv",
			"f.lower_bound as lower",
			"f.upper_bound as upper",
		])
		.select(["f.first_quartile as firstQuartile", "f.third_quartile as thirdQuartile", "f.steadiness"])
		.orderBy("m.position")
		.orderBy("c.cropKey")
		.orderBy("c.areaKind")
		.orderBy("c.areaKey")
		.limit(limit);
	if (query.status) page = page.where(statusExpression, "in", query.status);
	return page;
}

/** Cells of one measure, which stands beside them as `m`. */
export function selectCells(releaseId: string, query: Omit<CellsQuery, "limit">, after: Place | null) {
	let cells = reader()
		.selectFrom("release.cell as c")
		.innerJoin("release.area as a", (join) =>
			join.onRef("a.release_id", "=", "c.release_id").onRef("a.area_key", "=", "c.area_key"),
		)
		.select(["c.crop_key as cropKey", "c.area_key as areaKey", "c.status as cellStatus"])
		.select(["c.respondents_band as respondentsBand", "a.kind as areaKind", "a.name as areaName"])
		.select("a.state_fips as stateFips")
		.where("c.release_id", "=", releaseId)
		.orderBy("c.crop_key")
		.orderBy("a.kind")
		.orderBy("c.area_key");
	if (query.crop) cells = cells.where("c.crop_key", "in", query.crop);
	if (query.area) cells = cells.where("c.area_key", "in", query.area);
	if (query.kind) cells = cells.where("a.kind", "in", query.kind);
	if (query.state) cells = cells.where("a.state_fips", "in", query.state);
	if (after) {
		const [position, crop, kind, area] = after;
		cells = cells.where(
			sql<boolean>`(m.position, c.crop_key, a.kind, c.area_key) > (${position}::int, ${crop}, ${kind}, ${area})`,
		);
	}
	return cells;
}

const figureOfRow = (releaseId: string) =>
	reader()
		.selectFrom("release.figure")
		.select(["value", "standard_error", "cv", "lower_bound", "upper_bound", "first_quartile", "third_quartile"])
		.select("steadiness")
		.where("release_id", "=", releaseId)
		.where(sql<boolean>`(measure_key, crop_key, area_key) = (m.measure_key, c."cropKey", c."areaKey")`)
		.limit(1);

/** As `observationStatus` tells it of a row, for the database to choose rows by. */
const statusExpression = sql<string>`case when c."cellStatus" = 'withheld' then 'Q' when c."cellStatus" = 'no_growers' then 'M'
	when f.steadiness is null then 'O' when f.value is null or f.steadiness = 'rough' then 'N' else 'A' end`;
