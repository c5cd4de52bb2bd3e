import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";

/** Operations that sent in for the first time within a day, counted from the opening: 0 is its first 24 hours. */
export type AnsweredDay = { day: number; operations: number; bearingTrees: number };

/** When the answers of a survey that count came, in the viewer's states, with the trees of a crop or of all. */
export async function listAnsweredDays(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	cropKey: string,
): Promise<AnsweredDay[]> {
	return trx
		.selectFrom("collect.answered_count")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", cropKey)
		.where("state_fips", "in", viewer.stateFips)
		.groupBy("day")
		.having(sql`sum(operations)`, ">", 0)
		.orderBy("day")
		.select("day")
		.select([
			sql<number>`sum(operations)::int`.as("operations"),
			sql<number>`sum(bearing_trees)::float8`.as("bearingTrees"),
		])
		.execute();
}

/** When a survey opened, and how many days it has gone on: until it closed, or until now. */
export async function findSurveyDays(trx: Trx, surveyId: string) {
	return trx
		.selectFrom("collect.survey")
		.where("survey_id", "=", surveyId)
		.where("opened_at", "is not", null)
		.select([
			sql<number>`greatest(0, floor(extract(epoch from least(now(), coalesce(closed_at, closes_at), closes_at) - opened_at)
				/ 86400))::int`.as("lastDay"),
			sql<Date>`opened_at`.as("openedAt"),
		])
		.executeTakeFirst();
}

/**
 * The newest survey of an earlier season that was opened with the same form, in any version, and asked in a state of the
 * viewer's.
 */
export async function findEarlierSurvey(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("collect.form_version as w", "w.form_id", "v.form_id")
		.innerJoin("collect.survey as e", "e.form_version_id", "w.form_version_id")
		.where("s.survey_id", "=", surveyId)
		.whereRef("e.season", "<", "s.season")
		.where("e.opened_at", "is not", null)
		.where((eb) =>
			eb.exists(
				eb
					.selectFrom("collect.survey_state as g")
					.select(sql`1`.as("one"))
					.whereRef("g.survey_id", "=", "e.survey_id")
					.where("g.state_fips", "in", viewer.stateFips),
			),
		)
		.orderBy("e.season", "desc")
		.orderBy("e.opened_at", "desc")
		.limit(1)
		.select(["e.survey_id as surveyId", "e.season"])
		.executeTakeFirst();
}
