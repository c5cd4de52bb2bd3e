import { sql } from "kysely";
import type { DataRow } from "../data-file.ts";
import { type DataRecord, toRecord } from "../data-file.ts";
import { selectDataRows } from "../data-file.server.ts";
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
	let rows = selectDataRows(release.releaseId).select("m.position");
	if (query.measure) rows = rows.where("m.measure_key", "in", query.measure);
	if (query.crop) rows = rows.where("c.crop_key", "in", query.crop);
	if (query.area) rows = rows.where("c.area_key", "in", query.area);
	if (query.kind) rows = rows.where("a.kind", "in", query.kind);
	if (query.state) rows = rows.where("a.state_fips", "in", query.state);
	if (query.status) rows = rows.where(statusExpression, "in", query.status);
	if (after) {
		const [position, crop, kind, area] = after;
		rows = rows.where(
			sql<boolean>`(m.position, c.crop_key, a.kind, c.area_key) > (${position}::int, ${crop}, ${kind}, ${area})`,
		);
	}
	const found = await rows.limit(query.limit + 1).execute();
	const shown = found.slice(0, query.limit);
	const last = found.length > query.limit ? shown.at(-1)! : null;
	return {
		rows: shown.map((row) => toRecord(release, row as DataRow)),
		last: last && [last.position, last.cropKey, last.areaKind, last.areaKey],
	};
}

/** As `observationStatus` tells it of a row, for the database to choose rows by. */
const statusExpression = sql<string>`case when c.status = 'withheld' then 'Q' when c.status = 'no_growers' then 'M'
	when f.steadiness is null then 'O' when f.value is null or f.steadiness = 'rough' then 'N' else 'A' end`;
