import type { Trx } from "#app/auth/scope.server.ts";
import { queueWave } from "./mail-waves.server.ts";

/**
 * Thanks everyone who answered the survey of a published release, once a survey: a later revision of the figures is told on
 * the pages, and in no second mail.
 * @param trx under scope `network`. @returns how many are on their way.
 */
export async function queueThanks(trx: Trx, releaseDraftId: string): Promise<number> {
	const draft = await trx
		.selectFrom("collect.release_draft")
		.select("survey_id")
		.where("release_draft_id", "=", releaseDraftId)
		.where("status", "=", "approved")
		.executeTakeFirst();
	if (!draft) return 0;
	return queueWave(trx, { surveyId: draft.survey_id, kind: "thank_you", wave: 1, states: "all", queuedBy: null });
}
