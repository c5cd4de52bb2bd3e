import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { sql } from "kysely";
import type { DraftProgress } from "./draft.ts";

/** Drafts that a job works on, or will again. */
export const underWayStatuses = ["queued", "failed"] as const;

/** Notes how far a draft is. False when nobody waits for it any more: it was cancelled, or a newer one took its place. */
export async function saveDraftProgress(trx: Trx, releaseDraftId: string, progress: DraftProgress): Promise<boolean> {
	const row = await trx
		.updateTable("collect.release_draft")
		.set({ progress: JSON.stringify(progress) })
		.where("release_draft_id", "=", releaseDraftId)
		.where("status", "in", underWayStatuses)
		.returning("release_draft_id")
		.executeTakeFirst();
	return row !== undefined;
}

/** Stops the draft that is being made of a survey. The job notices within seconds; one that has ended is left alone. */
export async function cancelDraft(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
): Promise<{ outcome: "cancelled"; releaseDraftId: string } | { outcome: "not_under_way" }> {
	const row = await trx
		.updateTable("collect.release_draft")
		.set({ status: "cancelled" })
		.where("survey_id", "=", surveyId)
		.where("status", "in", underWayStatuses)
		.where(
			sql<boolean>`exists (select from collect.survey_state st
				where st.survey_id = release_draft.survey_id and st.state_fips = any (${viewer.stateFips}))`,
		)
		.returning("release_draft_id")
		.executeTakeFirst();
	return row ? { outcome: "cancelled", releaseDraftId: row.release_draft_id } : { outcome: "not_under_way" };
}
