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
	const day = sql<number>`floor(extract(epoch from r.first_submitted_at - s.opened_at) / 86400)::int`;
	return trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.frame_crop as c", (join) =>
			join.onRef("c.survey_id", "=", "r.survey_id").onRef("c.operation_id", "=", "r.operation_id"),
		)
		.innerJoin("collect.survey as s", "s.survey_id", "r.survey_id")
		.where("r.survey_id", "=", surveyId)
		.where("r.state_fips", "in", viewer.stateFips)
		.where("r.submitted_at", "is not", null)
		.$if(cropKey !== "all", (rows) => rows.where("c.crop_key", "=", cropKey))
		.groupBy(day)
		.orderBy(day)
		.select([
			day.as("day"),
			sql<number>`count(distinct r.operation_id)::int`.as("operations"),
			sql<number>`sum(c.bearing_trees)::float8`.as("bearingTrees"),
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
