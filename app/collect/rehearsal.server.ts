import { randomUUID } from "node:crypto";
import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import { setSurveyInHand, type Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink, replacePersonalLinks } from "./personal-link.server.ts";
import { plannedTestGrowers } from "./rehearsal.ts";
import { endRehearsal, freezeFrame } from "./survey-opening.server.ts";
import { findSurvey } from "./surveys.server.ts";

/** At least so long can a survey be rehearsed, also one that is to close tomorrow. */
const leastDays = 7;

/** The rehearsal of a survey, or null. */
export async function findRehearsal(trx: Trx, viewer: Associate, surveyId: string): Promise<string | null> {
	if (!(await findSurvey(trx, viewer, surveyId))) return null;
	const { rows } = await sql<{ id: string | null }>`select collect.rehearsal_of(${surveyId}::uuid) as id`.execute(trx);
	return rows[0]?.id ?? null;
}

/**
 * Makes a rehearsal of a draft, in place of an earlier one: a survey of its own that is open at once and asks a handful of
 * invented operations. A transaction sees both only while it has the rehearsal in hand, as it has from here on.
 * @param nameOf what the invented operations are called.
 */
export async function rehearseSurvey(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	nameOf: (number: number) => string,
) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.rehearsalOf || survey.state !== "draft") return "not_a_draft" as const;
	if (survey.statesNotHeld.length > 0) return "states_not_held" as const;
	// Two presses at once meet here: the second throws away what the first made.
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forUpdate().execute();
	await endRehearsal(trx, surveyId);
	const rehearsalId = randomUUID();
	await setSurveyInHand(trx, rehearsalId);
	await sql`insert into collect.survey (survey_id, form_version_id, season, title, crop_keys, weighting, closes_at,
			created_by, opened_at, rehearsal_of)
		select ${rehearsalId}::uuid, form_version_id, season, title, crop_keys, weighting,
			greatest(closes_at, now() + make_interval(days => ${leastDays})), ${viewer.personId}::uuid, now(), survey_id
		from collect.survey where survey_id = ${surveyId}`.execute(trx);
	await trx
		.insertInto("collect.survey_state")
		.values(survey.stateFips.map((state) => ({ survey_id: rehearsalId, state_fips: state })))
		.execute();
	await addTestGrowers(trx, rehearsalId, survey, nameOf);
	const operations = await freezeFrame(trx, { ...survey, surveyId: rehearsalId, rehearsalId });
	await note(trx, viewer, "survey.rehearsed", surveyId, { operations });
	return { rehearsalId };
}

/** Throws a rehearsal away with all that came of it. One that is gone already is as good. */
export async function discardRehearsal(trx: Trx, viewer: Associate, rehearsalId: string) {
	const rehearsal = await findSurvey(trx, viewer, rehearsalId);
	if (!rehearsal?.rehearsalOf) return "not_found" as const;
	if (rehearsal.statesNotHeld.length > 0) return "states_not_held" as const;
	await endRehearsal(trx, rehearsal.rehearsalOf);
	await note(trx, viewer, "survey.rehearsal_discarded", rehearsal.rehearsalOf, {});
	return { surveyId: rehearsal.rehearsalOf };
}

/** The invented operations of a rehearsal, with what each grows and whether it was answered for. */
export async function listTestGrowers(trx: Trx, viewer: Associate, rehearsalId: string) {
	const rows = await trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.innerJoin("directory.state as s", "s.state_fips", "f.state_fips")
		.where("f.survey_id", "=", rehearsalId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select(["f.operation_id as operationId", "o.name", "o.language", "f.disposition"])
		.select(["c.name as countyName", "s.postal as statePostal"])
		.select(
			sql<{ cropKey: string; trees: number }[]>`(select json_agg(json_build_object('cropKey', k.crop_key,
				'trees', k.bearing_trees) order by k.bearing_trees desc, k.crop_key) from collect.frame_crop k
				where k.survey_id = f.survey_id and k.operation_id = f.operation_id)`.as("crops"),
		)
		.orderBy("s.postal")
		.orderBy("o.created_at")
		.orderBy("o.name")
		.execute();
	return rows.map((row) => ({ ...row, language: row.language === "es" ? ("es" as const) : ("en" as const) }));
}

/** A link to the pages of an invented operation, told to the desk and mailed to nobody. Links told before end. */
export async function linkTestGrower(trx: Trx, viewer: Associate, place: { surveyId: string; operationId: string }) {
	const rehearsal = await findSurvey(trx, viewer, place.surveyId);
	if (!rehearsal?.rehearsalOf) return "not_found" as const;
	const growers = await listTestGrowers(trx, viewer, place.surveyId);
	const grower = growers.find(({ operationId }) => operationId === place.operationId);
	if (!grower) return "not_found" as const;
	await replacePersonalLinks(trx, place);
	return { name: grower.name, token: await createPersonalLink(trx, { ...place, expiresAt: rehearsal.closesAt }) };
}

type Asked = { stateFips: string[]; cropKeys: string[] };

/** Invented operations in real counties of the survey's states, each with an owner of its own. */
async function addTestGrowers(trx: Trx, rehearsalId: string, asked: Asked, nameOf: (number: number) => string) {
	const counties = await trx
		.selectFrom("directory.county")
		.select(["county_fips as countyFips", "state_fips as stateFips"])
		.where("state_fips", "in", asked.stateFips)
		.orderBy("county_fips")
		.execute();
	const planned = plannedTestGrowers(asked.cropKeys, counties).map((grower) => ({
		...grower,
		name: nameOf(grower.number),
		ownerId: randomUUID(),
		operationId: randomUUID(),
	}));
	await trx
		.insertInto("directory.owner")
		.values(planned.map(({ ownerId, name }) => ({ owner_id: ownerId, name })))
		.execute();
	await trx
		.insertInto("directory.operation")
		.values(
			planned.map((grower) => ({
				operation_id: grower.operationId,
				owner_id: grower.ownerId,
				name: grower.name,
				county_fips: grower.countyFips,
				state_fips: grower.stateFips,
				contact_name: grower.name,
				language: grower.language,
				rehearsal_id: rehearsalId,
			})),
		)
		.execute();
	await trx
		.insertInto("directory.planting")
		.values(
			planned.flatMap(({ operationId, plantings }) =>
				plantings.map(({ cropKey, bearingTrees }) => ({
					operation_id: operationId,
					crop_key: cropKey,
					bearing_trees: bearingTrees,
				})),
			),
		)
		.execute();
}

function note(
	trx: Trx,
	viewer: Associate,
	action: "survey.rehearsed" | "survey.rehearsal_discarded",
	surveyId: string,
	detail: Record<string, unknown>,
) {
	return logEvent(trx, { personId: viewer.personId, action, subjectKind: "survey", subjectId: surveyId, detail });
}
