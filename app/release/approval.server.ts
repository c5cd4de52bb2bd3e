import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import type { Words } from "#app/lib/words.ts";
import { isAsAudited } from "./checksums.server.ts";
import { ReleaseAudit, ReleaseMethod } from "./draft.ts";
import { listDraftCells } from "./drafts.server.ts";
import { lockDraft } from "./publish.server.ts";
import { isUpToDate } from "./season-releases.server.ts";

export type Approved = { outcome: "scheduled" | "not_found" | "not_waiting" | "own_draft" | "changed" | "outdated" };

/**
 * Approves an audited draft for publication at a moment, which may be now or have gone by. The approver is another person
 * than the drafter, the draft's cells are those that were audited, and no other survey of the season was published since.
 * `publishRelease` does the rest.
 */
export async function approveDraft(
	trx: Trx,
	viewer: Coordinator,
	releaseDraftId: string,
	publishAt: Date,
): Promise<Approved> {
	const draft = await lockDraft(trx, releaseDraftId);
	if (!draft) return { outcome: "not_found" };
	if (draft.status !== "audited") return { outcome: "not_waiting" };
	if (draft.drafted_by === viewer.personId) return { outcome: "own_draft" };
	const cells = await listDraftCells(trx, releaseDraftId);
	const { passed, heldAgainst } = ReleaseAudit.parse(draft.audit);
	if (!passed || !isAsAudited(draft, ReleaseMethod.parse(draft.method), cells)) return { outcome: "changed" };
	if (!(await isUpToDate(trx, draft.survey_id, heldAgainst))) return { outcome: "outdated" };
	await trx
		.updateTable("collect.release_draft")
		.set({ status: "scheduled", decided_by: viewer.personId, decided_at: new Date(), publish_at: publishAt })
		.where("release_draft_id", "=", releaseDraftId)
		.execute();
	return { outcome: "scheduled" };
}

/** Takes an approval back before its minute: the draft waits for a decision again. Any coordinator may, the approver is gone at times. */
export async function unscheduleDraft(
	trx: Trx,
	_viewer: Coordinator,
	releaseDraftId: string,
): Promise<"unscheduled" | "not_scheduled"> {
	const row = await trx
		.updateTable("collect.release_draft")
		.set({ status: "audited", decided_by: null, decided_at: null, publish_at: null })
		.where("release_draft_id", "=", releaseDraftId)
		.where("status", "=", "scheduled")
		.returning("release_draft_id")
		.executeTakeFirst();
	return row ? "unscheduled" : "not_scheduled";
}

/**
 * Withdraws a published release: its figures are served to nobody any more, and its address says when it was withdrawn and
 * why. Nothing is deleted, and no withdrawal is taken back: a revision tells the figures anew.
 */
export async function withdrawRelease(
	trx: Trx,
	_viewer: Coordinator,
	releaseId: string,
	reason: Words,
): Promise<{ outcome: "withdrawn"; number: number } | { outcome: "not_found" | "already_withdrawn" }> {
	const release = await trx
		.selectFrom("release.release")
		.select("number")
		.where("release_id", "=", releaseId)
		.executeTakeFirst();
	if (!release) return { outcome: "not_found" };
	const row = await trx
		.insertInto("release.withdrawal")
		.values({ release_id: releaseId, reason: JSON.stringify(reason) })
		.onConflict((conflict) => conflict.column("release_id").doNothing())
		.returning("release_id")
		.executeTakeFirst();
	return row ? { outcome: "withdrawn", number: release.number } : { outcome: "already_withdrawn" };
}
