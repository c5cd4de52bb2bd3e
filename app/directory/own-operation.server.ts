import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";

/** The one place that says which operation a signed-in grower may work on. A personal link opens none. */
export async function findOwnOperation(trx: Trx, viewer: Grower, operationId: string) {
	if (viewer.link || !z.guid().safeParse(operationId).success) return undefined;
	if (!viewer.operationIds.includes(operationId)) return undefined;
	return trx
		.selectFrom("directory.operation as o")
		.innerJoin("directory.county as c", "c.county_fips", "o.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "o.state_fips")
		.where("o.operation_id", "=", operationId)
		.where("o.status", "=", "active")
		.select([
			"o.operation_id as operationId",
			"o.name",
			"o.county_fips as countyFips",
			"c.name as countyName",
			"o.state_fips as stateFips",
			"s.time_zone as timeZone",
		])
		.executeTakeFirst();
}
