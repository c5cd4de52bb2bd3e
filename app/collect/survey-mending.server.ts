import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { SurveyChange } from "./survey-draft.schema.ts";
import { endRehearsal } from "./survey-opening.server.ts";
import { findSurvey, readDraft, writeStates } from "./surveys.server.ts";

/**
 * Changes what a draft asks, of whom and until when; its form stays. A rehearsal under way goes on with what it began with.
 * @returns what to mend, as `createSurvey` does, where it cannot be written.
 */
export async function changeDraft(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	change: SurveyChange,
	now = new Date(),
) {
	const draft = await lockDraft(trx, viewer, surveyId);
	if (typeof draft === "string") return draft;
	const read = await readDraft(trx, viewer, { ...change, formTitle: draft.formTitle }, now);
	if (read.problems) return { problems: read.problems };
	await trx.updateTable("collect.survey").set(read.values).where("survey_id", "=", surveyId).execute();
	await trx.deleteFrom("collect.survey_state").where("survey_id", "=", surveyId).execute();
	await writeStates(trx, surveyId, change.states);
	const detail = { season: change.season, states: change.states };
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.changed",
		subjectKind: "survey",
		subjectId: surveyId,
		detail,
	});
	return "changed" as const;
}

/** Throws a draft away, with its brief and its rehearsal. */
export async function discardDraft(trx: Trx, viewer: Associate, surveyId: string) {
	const draft = await lockDraft(trx, viewer, surveyId);
	if (typeof draft === "string") return draft;
	await endRehearsal(trx, surveyId);
	await sql`select collect.discard_draft(${surveyId}::uuid)`.execute(trx);
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.discarded",
		subjectKind: "survey",
		subjectId: surveyId,
		detail: { season: draft.season, title: draft.title },
	});
	return "discarded" as const;
}

/** The opening waits, or has been quicker and is seen. */
async function lockDraft(trx: Trx, viewer: Associate, surveyId: string) {
	const seen = await findSurvey(trx, viewer, surveyId);
	if (!seen || seen.rehearsalOf) return "not_found" as const;
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forUpdate().execute();
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.state !== "draft") return "not_a_draft" as const;
	if (survey.statesNotHeld.length > 0) return "states_not_held" as const;
	return survey;
}
