import { randomUUID } from "node:crypto";
import { sql, type Transaction } from "kysely";
import type { Associate } from "#app/auth/viewer.ts";
import type { DB } from "#db/schema.ts";
import { findCounty } from "./areas.server.ts";
import { compareCrops } from "./crops.ts";
import type { OperationInput, OperationQuery } from "./operation.schema.ts";

type Trx = Transaction<DB>;
const pageSize = 50;
const isUuid = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i;

export type OperationRow = {
	operationId: string;
	name: string;
	ownerName: string;
	countyFips: string;
	countyName: string;
	stateFips: string;
	statePostal: string;
	contactName: string;
	email: string | null;
	language: "en" | "es";
	status: string;
	cropKeys: string[];
	bearingTrees: number;
};
export type OperationPage = { rows: OperationRow[]; total: number; page: number; pageCount: number };

/** The one place that says whose operations an associate can see. */
function selectOperations(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.owner as w", "w.owner_id", "o.owner_id")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where((eb) => eb("o.state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))));
}

/** A page of operations. Equal sort values are ordered by id, so that no row shows twice or never while paging. */
export async function listOperations(trx: Trx, viewer: Associate, query: OperationQuery): Promise<OperationPage> {
	const { q, stateFips, cropKey, sort, direction } = query;
	// Who has left and was forgotten has no name to be found by.
	let matching = selectOperations(trx, viewer).where("o.left_at", "is", null);
	if (stateFips) matching = matching.where("o.state_fips", "=", stateFips);
	if (q) {
		const pattern = `%${q.replace(/[\\%_]/g, String.raw`\$&`)}%`;
		matching = matching.where((eb) =>
			eb.or([
				eb("o.name", "ilike", pattern),
				eb("w.name", "ilike", pattern),
				eb("o.contact_name", "ilike", pattern),
				eb("o.email", "ilike", pattern),
				eb("c.name", "ilike", pattern),
			]),
		);
	}
	if (cropKey) {
		matching = matching.where((eb) =>
			eb.exists(
				eb
					.selectFrom("directory.planting as p")
					.select("p.planting_id")
					.whereRef("p.operation_id", "=", "o.operation_id")
					.where("p.crop_key", "=", cropKey)
					.where("p.removed_on", "is", null),
			),
		);
	}

	const { total } = await matching.select((eb) => eb.fn.countAll<number>().as("total")).executeTakeFirstOrThrow();
	const pageCount = Math.max(1, Math.ceil(total / pageSize));
	const page = Math.min(query.page, pageCount);
	const column = { name: "o.name", owner: "w.name", county: "c.name", trees: "g.bearing_trees" } as const;
	const rows = await matching
		// What each grows now; what was taken out is left aside.
		.innerJoinLateral(
			(eb) =>
				eb
					.selectFrom("directory.planting as p")
					.select([
						sql<string[]>`coalesce(array_agg(distinct p.crop_key), '{}')`.as("crop_keys"),
						sql<number>`coalesce(sum(p.bearing_trees), 0)`.as("bearing_trees"),
					])
					.whereRef("p.operation_id", "=", "o.operation_id")
					.where("p.removed_on", "is", null)
					.as("g"),
			(join) => join.onTrue(),
		)
		.select(rowColumns)
		.select(["g.crop_keys as cropKeys", "g.bearing_trees as bearingTrees"])
		.orderBy(sql.ref(column[sort]), direction)
		.orderBy("o.operation_id")
		.limit(pageSize)
		.offset((page - 1) * pageSize)
		.execute();
	return { rows: rows.map(toRow), total, page, pageCount };
}

const rowColumns = [
	"o.operation_id as operationId",
	"o.name",
	"w.name as ownerName",
	"o.county_fips as countyFips",
	"c.name as countyName",
	"o.state_fips as stateFips",
	"s.postal as statePostal",
	"o.contact_name as contactName",
	"o.email",
	"o.language",
	"o.status",
] as const;

function toRow<T extends { language: string; cropKeys: string[] }>(row: T) {
	return { ...row, language: row.language as "en" | "es", cropKeys: row.cropKeys.toSorted(compareCrops) };
}

/** One operation with owner and plantings; undefined also where it lies outside the viewer's states. */
export async function findOperation(trx: Trx, viewer: Associate, operationId: string) {
	if (!isUuid.test(operationId)) return undefined;
	const operation = await selectOperations(trx, viewer)
		.select([
			...rowColumns,
			"o.owner_id as ownerId",
			"o.phone",
			"o.mass_unit as massUnit",
			"o.mail_wanted as mailWanted",
			"o.mail_returned_at as mailReturnedAt",
			"c.district_key as districtKey",
			"s.time_zone as timeZone",
		])
		.where("o.operation_id", "=", operationId)
		.executeTakeFirst();
	if (!operation) return undefined;
	const plantings = await trx
		.selectFrom("directory.planting")
		.select([
			"planting_id as plantingId",
			"crop_key as cropKey",
			"cultivar",
			"bearing_trees as bearingTrees",
			"young_trees as youngTrees",
			"area_acres as areaAcres",
			"planted_year as plantedYear",
			"removed_on as removedOn",
		])
		.where("operation_id", "=", operationId)
		.execute();
	const byCrop = plantings.toSorted(
		(a, b) =>
			compareCrops(a.cropKey, b.cropKey) ||
			a.cultivar.localeCompare(b.cultivar) ||
			a.plantingId.localeCompare(b.plantingId),
	);
	return { ...operation, language: operation.language as "en" | "es", plantings: byCrop };
}

/** Enters an operation with an owner of its own. A county outside the viewer's states is as unknown as one that is not. */
export async function createOperation(
	trx: Trx,
	viewer: Associate,
	input: OperationInput,
): Promise<{ operationId: string } | "unknown_county"> {
	const county = await findCounty(trx, input.countyFips);
	if (!county || !viewer.stateFips.includes(county.state_fips)) return "unknown_county";
	// Ids are made here: row-level security shows an owner only once its operation is there, so nothing can be returned.
	const [ownerId, operationId] = [randomUUID(), randomUUID()];
	await trx.insertInto("directory.owner").values({ owner_id: ownerId, name: input.ownerName }).execute();
	await trx
		.insertInto("directory.operation")
		.values({
			operation_id: operationId,
			owner_id: ownerId,
			name: input.name,
			county_fips: county.county_fips,
			state_fips: county.state_fips,
			contact_name: input.contactName,
			email: input.email ?? null,
			phone: input.phone ?? null,
			language: input.language,
		})
		.execute();
	return { operationId };
}
