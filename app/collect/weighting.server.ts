import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { hasDraftedRelease } from "./survey-opening.server.ts";
import { findSurvey } from "./surveys.server.ts";
import type { Weighting } from "./weighting.ts";

/**
 * Chooses by which weights a survey's figures are made, for all its states. Once its release is drafted the choice stays: the
 * same answers told by two sets of weights would be a second release of them.
 */
export async function chooseWeighting(trx: Trx, viewer: Associate, surveyId: string, weighting: Weighting) {
	if (!(await findSurvey(trx, viewer, surveyId))) return "not_found" as const;
	// A draft that is being begun locks the survey too: whichever is first is seen by the other.
	await trx.selectFrom("collect.survey").select("survey_id").where("survey_id", "=", surveyId).forUpdate().execute();
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (!survey.mayManage) return "states_not_held" as const;
	if (survey.weighting === weighting) return "unchanged" as const;
	if (await hasDraftedRelease(trx, surveyId)) return "already_drafted" as const;
	await trx.updateTable("collect.survey").set({ weighting }).where("survey_id", "=", surveyId).execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.weighted",
		subjectKind: "survey",
		subjectId: surveyId,
		detail: { from: survey.weighting, weighting },
	});
	return "chosen" as const;
}
