import { sql, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { FrameCell, ToldAnswer } from "#app/tally/tally.ts";

/**
 * A survey's frozen frame by crop, county and stratum: operations and their bearing trees. Crop `all` counts each operation
 * once, with the trees of all its crops. Whoever was found not eligible is left out, as in `listFrameStrata`.
 */
export async function listFrameCells(
	trx: Transaction<DB>,
	surveyId: string,
): Promise<(FrameCell & { cropKey: string })[]> {
	const { rows } = await sql<FrameCell & { cropKey: string }>`
		select crop_key as "cropKey", county_fips as "countyFips", stratum_key as "stratumKey",
			sum(operations)::int as operations, sum(bearing_trees)::float8 as "bearingTrees"
		from collect.frame_count
		where survey_id = ${surveyId} and disposition <> 'not_eligible'
		group by crop_key, county_fips, stratum_key having sum(operations) > 0
		order by 1, 2, 3`.execute(trx);
	return rows;
}

/**
 * What each operation told of one measure, for weights that differ from one operation to the next, with the bearing trees that
 * the frame has of it: a tally has only their sums. Set-aside answers are left out. It holds one measure's answers at a
 * time, so that a survey is gone through once and never held whole.
 * @param cropKeys which crops', `all` among them where it is wanted.
 * @returns ordered by crop and operation, so that two runs give the same list.
 */
export async function listToldAnswers(
	trx: Transaction<DB>,
	{ surveyId, measureKey, cropKeys }: { surveyId: string; measureKey: string; cropKeys: readonly string[] },
): Promise<(ToldAnswer & { cropKey: string })[]> {
	const { rows } = await sql<ToldAnswer & { cropKey: string }>`
		with known as (
			select operation_id, coalesce(crop_key, 'all') as crop_key, sum(bearing_trees)::float8 as bearing_trees
			from collect.frame_crop where survey_id = ${surveyId}
			group by grouping sets ((operation_id, crop_key), (operation_id))
		)
		select f.crop_key as "cropKey", f.operation_id as "operationId", f.county_fips as "countyFips",
			f.stratum_key as "stratumKey", coalesce(k.bearing_trees, 0) as "bearingTrees", f.y, f.x
		from collect.fact f left join known k using (operation_id, crop_key)
		where f.survey_id = ${surveyId} and f.measure_key = ${measureKey} and f.crop_key = any (${cropKeys})
			and not f.set_aside and f.y is not null and f.x is not null
		order by f.crop_key, f.operation_id`.execute(trx);
	return rows;
}

/** The bearing trees that a survey's frame has of one operation, of a crop or of `all`. */
export async function findFrameTrees(
	trx: Transaction<DB>,
	{ surveyId, operationId, cropKey }: { surveyId: string; operationId: string; cropKey: string },
): Promise<number> {
	const row = await trx
		.selectFrom("collect.frame_crop")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.$if(cropKey !== "all", (rows) => rows.where("crop_key", "=", cropKey))
		.select(sql<number>`coalesce(sum(bearing_trees), 0)::float8`.as("trees"))
		.executeTakeFirstOrThrow();
	return row.trees;
}
