import { sql, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { CropRespondents, FrameStratum, Tally } from "#app/tally/tally.ts";

/**
 * Every tally row of a survey, made by one GROUP BY over its facts.
 *
 * A fact is one operation's y and x for one measure and crop, its plantings summed. Facts set aside in review are
 * counted and left out of the sums; a cell with nothing else is still listed, with n = 0. PostgreSQL's `regr_*`
 * aggregates give the centred second moments in one stable pass. (PostgreSQL 15, a million facts in 360 cells, two
 * cores: 0.45 s, where count and plain sums by county and stratum take 0.33 s.)
 * @returns rows ordered by measure, crop, county and stratum, so that two runs give the same list.
 */
export async function listTallies(trx: Transaction<DB>, surveyId: string): Promise<Tally[]> {
	const kept = sql`filter (where not set_aside)`;
	const rows = await trx
		.selectFrom("collect.fact")
		.where("survey_id", "=", surveyId)
		.groupBy(["measure_key", "crop_key", "state_fips", "county_fips", "stratum_key"])
		.orderBy("measure_key")
		.orderBy("crop_key")
		.orderBy("county_fips")
		.orderBy("stratum_key")
		.select([
			"measure_key as measureKey",
			"crop_key as cropKey",
			"county_fips as countyFips",
			"state_fips as stateFips",
			"stratum_key as stratumKey",
			sql<number>`(count(*) ${kept})::int`.as("n"),
			sql<number>`coalesce(sum(y) ${kept}, 0)`.as("sumY"),
			sql<number>`coalesce(sum(x) ${kept}, 0)`.as("sumX"),
			sql<number>`coalesce(regr_syy(y, x) ${kept}, 0)`.as("mYY"),
			sql<number>`coalesce(regr_sxx(y, x) ${kept}, 0)`.as("mXX"),
			sql<number>`coalesce(regr_sxy(y, x) ${kept}, 0)`.as("mXY"),
			sql<number>`(count(*) filter (where set_aside))::int`.as("setAside"),
		])
		.execute();
	return rows;
}

/**
 * Operations that answered about each crop, by stratum: the whole stratum's count, whichever county the operation
 * is in and whichever measures it answered. An operation whose facts were all set aside is not counted.
 */
export async function listCropRespondents(trx: Transaction<DB>, surveyId: string): Promise<CropRespondents[]> {
	return trx
		.selectFrom("collect.fact")
		.where("survey_id", "=", surveyId)
		.where("set_aside", "=", false)
		.groupBy(["crop_key", "stratum_key"])
		.orderBy("crop_key")
		.orderBy("stratum_key")
		.select([
			"crop_key as cropKey",
			"stratum_key as stratumKey",
			sql<number>`count(distinct operation_id)::int`.as("respondents"),
		])
		.execute();
}

/**
 * The strata of a survey's frozen frame, crop by crop: how many operations of each have the crop. Crop `all` counts the
 * operations that have any, each once. An operation found not eligible (out of business, no such crop) stands for nobody,
 * so it is left out: counting it would let its neighbours' answers stand for it.
 */
export async function listFrameStrata(
	trx: Transaction<DB>,
	surveyId: string,
): Promise<(FrameStratum & { cropKey: string })[]> {
	const stratum = sql`o.state_fips, o.size_class, o.stratum_key`;
	const { rows } = await sql<FrameStratum & { cropKey: string }>`
		select coalesce(c.crop_key, 'all') as "cropKey", o.stratum_key as "stratumKey", o.state_fips as "stateFips",
			array_position(array['small', 'medium', 'large'], o.size_class) as "sizeClass",
			count(distinct c.operation_id)::int as "frameSize"
		from collect.frame_crop c join collect.frame_operation o using (survey_id, operation_id)
		where c.survey_id = ${surveyId} and o.disposition <> 'not_eligible'
		group by grouping sets ((c.crop_key, ${stratum}), (${stratum}))
		order by 1, 2`.execute(trx);
	return rows;
}
