import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import type { Words } from "#app/lib/words.ts";
import type { StepChanges } from "./step-change.ts";
import { isId } from "./surveys.server.ts";
import { isMassUnit } from "./units.ts";

/** One operation's place in one survey. */
export type AnswerPlace = { surveyId: string; operationId: string };

/** How many days after the closing what was begun before it can still be sent in, as late. */
const lateDays = 14;

/** The one place that says what a grower can answer. */
export async function findPlace(trx: Trx, viewer: Grower, { surveyId, operationId }: AnswerPlace) {
	if (!isId(surveyId) || !isId(operationId) || !viewer.operationIds.includes(operationId)) return undefined;
	const { link } = viewer;
	if (link && (link.surveyId !== surveyId || link.operationId !== operationId)) return undefined;
	const row = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("collect.frame_operation as f", "f.survey_id", "s.survey_id")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.innerJoin("directory.county as c", "c.county_fips", "f.county_fips")
		.innerJoin("directory.state as d", "d.state_fips", "f.state_fips")
		.where("s.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.where("s.opened_at", "is not", null)
		// Whoever left while an answer was on its way is asked no more.
		.where("o.status", "=", "active")
		.select([
			"s.season",
			sql<Words>`s.title`.as("title"),
			"v.definition",
			sql<Date>`s.opened_at`.as("opensAt"),
			"s.closes_at as closesAt",
			// The clock and not the transaction's beginning: who waited for a lock may have waited past the closing.
			sql<boolean>`s.closed_at is null and s.closes_at > clock_timestamp()`.as("isOpen"),
			sql<boolean>`least(s.closed_at, s.closes_at) > clock_timestamp() - make_interval(days => ${lateDays})`.as(
				"isRecent",
			),
			sql<boolean>`s.rehearsal_of is not null`.as("isRehearsal"),
			"o.name as operationName",
			"o.mass_unit",
			"o.language",
			"c.name as countyName",
			"f.state_fips as stateFips",
			"d.time_zone as timeZone",
		])
		.executeTakeFirst();
	if (!row) return undefined;
	const { mass_unit: massUnit, isRecent, ...seen } = row;
	const response = (await findResponse(trx, { surveyId, operationId })) ?? null;
	return {
		...seen,
		/** Closed while it was being answered: what is sent in now is kept, and does not count by itself. */
		isLate: !row.isOpen && isRecent && response !== null,
		massUnit: isMassUnit(massUnit) ? massUnit : ("lb" as const),
		language: row.language === "es" ? ("es" as const) : ("en" as const),
		response,
	};
}

function findResponse(trx: Trx, { surveyId, operationId }: AnswerPlace) {
	return trx
		.selectFrom("collect.response")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.select([
			"response_id as responseId",
			"pledge_version as pledgeVersion",
			"draft_version as draftVersion",
			sql<StepChanges>`step_changes`.as("stepChanges"),
			"submitted_version as submittedVersion",
			"receipt_code as receiptCode",
			"submitted_at as submittedAt",
			"late_at as lateAt",
			"withdrawn_at as withdrawnAt",
		])
		.executeTakeFirst();
}

/**
 * Keeps an open survey from closing until the transaction ends: what is written here was in time, or is known to be late.
 * Closing waits, other growers do not.
 */
export async function holdSurvey(trx: Trx, viewer: Grower, place: AnswerPlace) {
	// Asked before, so that nobody holds up a survey that is not theirs to answer; and after, as it then stands.
	if (!(await findPlace(trx, viewer, place))) return "not_found" as const;
	const { surveyId } = place;
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forShare().execute();
	const held = await findPlace(trx, viewer, place);
	return held?.isOpen || held?.isLate ? held : ("closed" as const);
}
