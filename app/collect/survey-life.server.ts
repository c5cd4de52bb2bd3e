import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findFormToAsk } from "./forms.server.ts";
import { closingNextSeason } from "./survey-closing.ts";
import { findSurvey } from "./surveys.server.ts";

/**
 * Makes next season's draft of a survey: the same form as it is today, crops, weighting, brief and closing day, in
 * those of its states that the viewer holds. Pressed twice, it leads to the same draft while that is not opened.
 */
export async function copySurvey(trx: Trx, viewer: Associate, surveyId: string) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forUpdate().execute();
	const before = await trx
		.selectFrom("collect.survey")
		.select("survey_id")
		.where("copied_from", "=", surveyId)
		.where("created_by", "=", viewer.personId)
		.where("opened_at", "is", null)
		.executeTakeFirst();
	if (before) return { surveyId: before.survey_id };
	const { form_key: formKey } = await trx
		.selectFrom("collect.survey as s")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("collect.form as f", "f.form_id", "v.form_id")
		.select("f.form_key")
		.where("s.survey_id", "=", surveyId)
		.executeTakeFirstOrThrow();
	const form = await findFormToAsk(trx, formKey);
	if (!form) return "not_found" as const;
	const states = survey.stateFips.filter((state) => viewer.stateFips.includes(state));
	const { survey_id: copyId } = await trx
		.insertInto("collect.survey")
		.values({
			form_version_id: form.formVersionId,
			season: survey.season + 1,
			title: JSON.stringify(survey.title),
			crop_keys: survey.cropKeys,
			closes_at: closingNextSeason(survey.closesAt, survey.timeZone, new Date()),
			created_by: viewer.personId,
			copied_from: surveyId,
			weighting: survey.weighting,
		})
		.returning("survey_id")
		.executeTakeFirstOrThrow();
	await trx
		.insertInto("collect.survey_state")
		.values(states.map((state) => ({ survey_id: copyId, state_fips: state })))
		.execute();
	await sql`insert into collect.survey_brief (survey_id, why, asked_by, decision, planned, written_by)
		select ${copyId}::uuid, why, asked_by, decision, planned, ${viewer.personId}::uuid
		from collect.survey_brief where survey_id = ${surveyId}`.execute(trx);
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.copied",
		subjectKind: "survey",
		subjectId: copyId,
		detail: { from: surveyId },
	});
	return { surveyId: copyId };
}

/** Puts a closed survey aside, or takes it out again. It stays as it is and where it is; lists leave it out. */
export async function archiveSurvey(trx: Trx, viewer: Associate, surveyId: string, aside: boolean) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.state !== "closed") return "not_closed" as const;
	if (!survey.mayManage) return "states_not_held" as const;
	if (aside === (survey.archivedAt !== null)) return "unchanged" as const;
	await trx
		.updateTable("collect.survey")
		.set(aside ? { archived_at: sql`now()`, archived_by: viewer.personId } : { archived_at: null, archived_by: null })
		.where("survey_id", "=", surveyId)
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: aside ? "survey.archived" : "survey.taken_out",
		subjectKind: "survey",
		subjectId: surveyId,
	});
	return aside ? ("archived" as const) : ("taken_out" as const);
}
