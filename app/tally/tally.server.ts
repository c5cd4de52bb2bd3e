import { sql, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { CropRespondents, DayCount, FrameStratum, KeptTally } from "#app/tally/tally.ts";

/**
 * Every tally row of a survey, as kept beside its facts.
 *
 * A fact is one operation's y and x for one measure and crop, its plantings summed. Facts set aside in review and answers
 * not given are counted and are in none of the sums; a cell with nothing else is still listed, with n = 0. A trigger
 * tallies the facts of a county and stratum anew whenever one of them comes, changes or goes, in the same transaction,
 * so that no rounding is left behind by what went.
 * @param only those of some measures, or of one crop.
 * @returns rows ordered by measure, crop, county and stratum, so that two runs give the same list.
 */
export async function listTallies(
	trx: Transaction<DB>,
	surveyId: string,
	only: { measureKeys?: readonly string[]; cropKey?: string } = {},
): Promise<KeptTally[]> {
	const { measureKeys, cropKey } = only;
	return trx
		.selectFrom("collect.tally")
		.where("survey_id", "=", surveyId)
		.$if(measureKeys !== undefined, (rows) =>
			rows.where((eb) => eb("measure_key", "=", eb.fn.any(eb.val(measureKeys!)))),
		)
		.$if(cropKey !== undefined, (rows) => rows.where("crop_key", "=", cropKey!))
		.orderBy("measure_key")
		.orderBy("crop_key")
		.orderBy("county_fips")
		.orderBy("stratum_key")
		.select(["measure_key as measureKey", "crop_key as cropKey"])
		.select(["county_fips as countyFips", "state_fips as stateFips", "stratum_key as stratumKey"])
		.select(["n", "sum_y as sumY", "sum_x as sumX", "m_yy as mYY", "m_xx as mXX", "m_xy as mXY"])
		.select(["owners", "largest_y as largestY", "second_y as secondY"])
		.select([sql<DayCount[] | null>`days`.as("days"), "set_aside as setAside", "unanswered"])
		.execute();
}

/** Whether any answer of a survey is in a tally, whatever it is about. */
export async function isAnyTallied(trx: Transaction<DB>, surveyId: string): Promise<boolean> {
	const found = await trx
		.selectFrom("collect.tally")
		.where("survey_id", "=", surveyId)
		.where("n", ">", 0)
		.limit(1)
		.select("n")
		.executeTakeFirst();
	return found !== undefined;
}

/**
 * Makes every tally of a survey anew by one GROUP BY over its facts. For facts written past the triggers; others are
 * tallied already, with an equal result. Submissions wait until the transaction ends. The caller's scope must see all
 * facts of the survey and may write tallies: the network's.
 */
export async function rebuildTallies(trx: Transaction<DB>, surveyId: string): Promise<void> {
	await sql`select collect.retally_survey(${surveyId}::uuid)`.execute(trx);
}

/**
 * Operations that answered about each crop, by stratum: the whole stratum's count, whichever county the operation
 * is in and whichever measures it answered. An operation whose facts were all set aside, or that gave no answer that any
 * measure could use, is not counted.
 */
export async function listCropRespondents(trx: Transaction<DB>, surveyId: string): Promise<CropRespondents[]> {
	return trx
		.selectFrom("collect.fact")
		.where("survey_id", "=", surveyId)
		.where("set_aside", "=", false)
		.where("y", "is not", null)
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
	const { rows } = await sql<FrameStratum & { cropKey: string }>`
		select crop_key as "cropKey", stratum_key as "stratumKey", state_fips as "stateFips",
			array_position(array['small', 'medium', 'large'], size_class) as "sizeClass", sum(operations)::int as "frameSize"
		from collect.frame_count
		where survey_id = ${surveyId} and disposition <> 'not_eligible'
		group by crop_key, state_fips, size_class, stratum_key having sum(operations) > 0
		order by 1, 2`.execute(trx);
	return rows;
}
