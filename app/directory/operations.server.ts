import { sql, type Transaction } from "kysely";
import type { Associate } from "#app/auth/viewer.ts";
import type { DB } from "#db/schema.ts";
import { compareCrops } from "./crops.ts";

type Trx = Transaction<DB>;
const isUuid = /^[0-9a-f]{8}(-[0-9a-f]{4}){3}-[0-9a-f]{12}$/i;

/**
 * The one place that says whose operations an associate can see: a condition on `directory.operation o`. Those that were
 * invented for a rehearsal are on its pages alone.
 */
export function isSeenBy(viewer: Associate) {
	return sql<boolean>`(o.state_fips = any (${viewer.stateFips}::text[]) and o.rehearsal_id is null)`;
}

/** Operations that an associate can see, with all that lists and pages tell of them. */
export function selectOperations(trx: Trx, viewer: Associate) {
	return trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.owner as w", "w.owner_id", "o.owner_id")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where(isSeenBy(viewer));
}

/** What every list and page tells of an operation. */
export const rowColumns = [
	"o.operation_id as operationId",
	"o.name",
	"w.name as ownerName",
	"o.county_fips as countyFips",
	"c.name as countyName",
	"o.state_fips as stateFips",
	"s.postal as statePostal",
	"o.contact_name as contactName",
	"o.email",
	"o.phone",
	"o.language",
	"o.mail_wanted as mailWanted",
	"o.mail_returned_at as mailReturnedAt",
	"o.status",
] as const;

/** One operation with owner and plantings; undefined also where it lies outside the viewer's states. */
export async function findOperation(trx: Trx, viewer: Associate, operationId: string) {
	if (!isUuid.test(operationId)) return undefined;
	const operation = await selectOperations(trx, viewer)
		.select([
			...rowColumns,
			"o.owner_id as ownerId",
			"o.mass_unit as massUnit",
			"o.merged_into as mergedInto",
			"c.district_key as districtKey",
			"s.time_zone as timeZone",
		])
		.where("o.operation_id", "=", operationId)
		.executeTakeFirst();
	if (!operation) return undefined;
	const merged = await trx
		.selectFrom("directory.operation as o")
		.where("o.merged_into", "=", operationId)
		.where("o.status", "=", "merged")
		.where(isSeenBy(viewer))
		.select(["o.operation_id as operationId", "o.name"])
		.orderBy("o.name")
		.orderBy("o.operation_id")
		.execute();
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
	return { ...operation, language: operation.language as "en" | "es", plantings: byCrop, merged };
}
