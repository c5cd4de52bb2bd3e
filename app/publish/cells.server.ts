import type { Kysely } from "kysely";
import type { AreaKind, Cell, CellStatus, CropCell, Steadiness } from "./cell.ts";
import { reader, type ReaderDB } from "./reader.server.ts";

type Reader = Kysely<ReaderDB>;

/** One measure and crop in every area of a kind, by name. */
export async function listCells(
	releaseId: string,
	measureKey: string,
	cropKey: string,
	kind: AreaKind,
	db: Reader = reader(),
): Promise<Cell[]> {
	const rows = await selectCells(db, releaseId, [measureKey])
		.where("cell.crop_key", "=", cropKey)
		.where("area.kind", "=", kind)
		.execute();
	return rows.map(toCell);
}

/** One measure in one area, crop by crop, "all" among them. */
export async function listCropCells(
	releaseId: string,
	measureKey: string,
	areaKey: string,
	db: Reader = reader(),
): Promise<CropCell[]> {
	const rows = await selectCells(db, releaseId, [measureKey]).where("cell.area_key", "=", areaKey).execute();
	return rows.map(toCropCell);
}

export type CellAddress = { measure: string; crop: string; area: string };
const unique = (keys: string[]) => [...new Set(keys)];
export const addressKey = ({ measure, crop, area }: CellAddress) => `${measure}|${crop}|${area}`;

/** Looks up any number of figures by address. An address that the release does not hold is left out. */
export async function findCells(
	releaseId: string,
	addresses: CellAddress[],
	db: Reader = reader(),
): Promise<Record<string, CropCell>> {
	if (addresses.length === 0) return {};
	const rows = await selectCells(db, releaseId, unique(addresses.map((address) => address.measure)))
		.where("cell.crop_key", "in", unique(addresses.map((address) => address.crop)))
		.where("cell.area_key", "in", unique(addresses.map((address) => address.area)))
		.execute();
	const wanted = new Set(addresses.map(addressKey));
	return Object.fromEntries(
		rows
			.map(
				(row) =>
					[addressKey({ measure: row.measure_key, crop: row.crop_key, area: row.area_key }), toCropCell(row)] as const,
			)
			.filter(([key]) => wanted.has(key)),
	);
}

/** How many cells of a kind have each status: what a release says of itself, with no cell named. */
export async function countCells(
	releaseId: string,
	kind: AreaKind,
	db: Reader = reader(),
): Promise<Record<CellStatus, number>> {
	const rows = await db
		.selectFrom("release.cell as cell")
		.innerJoin("release.area as area", (join) =>
			join.onRef("area.release_id", "=", "cell.release_id").onRef("area.area_key", "=", "cell.area_key"),
		)
		.select(["cell.status", (eb) => eb.fn.countAll<number>().as("count")])
		.where("cell.release_id", "=", releaseId)
		.where("area.kind", "=", kind)
		.groupBy("cell.status")
		.execute();
	const counts = { shown: 0, withheld: 0, no_growers: 0 };
	for (const row of rows) counts[row.status as CellStatus] = row.count;
	return counts;
}

function selectCells(db: Reader, releaseId: string, measureKeys: string[]) {
	return (
		db
			.selectFrom("release.cell as cell")
			.innerJoin("release.area as area", (join) =>
				join.onRef("area.release_id", "=", "cell.release_id").onRef("area.area_key", "=", "cell.area_key"),
			)
			.innerJoin("release.measure as measure", "measure.release_id", "cell.release_id")
			// One look into the primary key for each cell. Joined, a release that nobody has analyzed yet, which is one just out, is
			// planned as if it held one row: with 3,108 counties that took 2,360 ms instead of 50.
			.leftJoinLateral(
				(eb) =>
					eb
						.selectFrom("release.figure as f")
						.select([
							"f.value",
							"f.lower_bound",
							"f.upper_bound",
							"f.first_quartile",
							"f.third_quartile",
							"f.steadiness",
						])
						.whereRef("f.release_id", "=", "cell.release_id")
						.whereRef("f.measure_key", "=", "measure.measure_key")
						.whereRef("f.crop_key", "=", "cell.crop_key")
						.whereRef("f.area_key", "=", "cell.area_key")
						.limit(1)
						.as("figure"),
				(join) => join.onTrue(),
			)
			.select([
				"measure.measure_key",
				"cell.crop_key",
				"cell.area_key",
				"area.name",
				"area.kind",
				"area.state_fips",
				"cell.status",
				"cell.respondents_band",
				"figure.value",
				"figure.lower_bound",
				"figure.upper_bound",
				"figure.first_quartile",
				"figure.third_quartile",
				"figure.steadiness",
			])
			.where("cell.release_id", "=", releaseId)
			.where("measure.measure_key", "in", measureKeys)
			.orderBy("area.name")
			.orderBy("cell.area_key")
			.orderBy("cell.crop_key")
	);
}

type CellRow = Awaited<ReturnType<ReturnType<typeof selectCells>["executeTakeFirstOrThrow"]>>;

function toCropCell(row: CellRow): CropCell {
	return { ...toCell(row), cropKey: row.crop_key };
}

function toCell(row: CellRow): Cell {
	// The tables refuse a figure of a hidden cell; said here again, so that no later query can let one through.
	const shown = row.status === "shown";
	return {
		areaKey: row.area_key,
		areaName: row.name,
		kind: row.kind as AreaKind,
		stateFips: row.state_fips,
		status: row.status as CellStatus,
		value: shown ? row.value : null,
		lower: shown ? row.lower_bound : null,
		upper: shown ? row.upper_bound : null,
		quartiles: shown ? quartilesOf(row) : null,
		steadiness: shown ? (row.steadiness as Steadiness | null) : null,
		respondentsBand: shown ? row.respondents_band : null,
	};
}

function quartilesOf({ first_quartile: first, third_quartile: third }: CellRow): Cell["quartiles"] {
	return first === null || third === null ? null : { first, third };
}
