import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Disposition } from "./frame-list.server.ts";

export type DispositionCount = { disposition: Disposition; operations: number; bearingTrees: number };

/**
 * What became of a survey's operations with a crop, in counties of the viewer's states: how many, and the bearing trees that
 * they had when the frame was frozen. Crop `all` counts each operation once, with the trees of all the survey's crops.
 */
export async function countDispositions(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ cropKey, countyFips }: { cropKey: string; countyFips: readonly string[] },
): Promise<DispositionCount[]> {
	if (countyFips.length === 0) return [];
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("collect.frame_crop as c", (join) =>
			join.onRef("c.survey_id", "=", "f.survey_id").onRef("c.operation_id", "=", "f.operation_id"),
		)
		.where("f.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("f.county_fips", "in", countyFips)
		.$if(cropKey !== "all", (query) => query.where("c.crop_key", "=", cropKey))
		.groupBy("f.disposition")
		.orderBy("f.disposition")
		.select([
			"f.disposition",
			sql<number>`count(distinct f.operation_id)::int`.as("operations"),
			sql<number>`sum(c.bearing_trees)::float8`.as("bearingTrees"),
		])
		.execute();
	return rows.map((row) => ({ ...row, disposition: row.disposition as Disposition }));
}
