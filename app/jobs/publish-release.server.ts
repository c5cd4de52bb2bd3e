import { logEvent } from "#app/auth/event-log.server.ts";
import { scopedTransaction, type Trx } from "#app/auth/scope.server.ts";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";
import { type NotPublished, type Published, publishRelease } from "#app/release/publish.server.ts";
import { filesJobKey } from "./make-release-files.server.ts";
import { queueJob } from "./queue.server.ts";
import { queueFollowers } from "./tell-followers.server.ts";

/** One job a draft: a new minute takes the place of the one before. */
export const publishJobKey = (releaseDraftId: string) => `publish_release:${releaseDraftId}`;

/**
 * Publishes an approved draft, tells the log and queues what follows, in the caller's transaction.
 * @param personId the coordinator who approved it.
 */
export async function publishApproved(
	trx: Trx,
	releaseDraftId: string,
	personId: string | null,
): Promise<Published | NotPublished> {
	const outcome = await publishRelease(trx, releaseDraftId, env().CODE_VERSION);
	if (outcome.outcome !== "published") return outcome;
	const { releaseId, number } = outcome;
	const subject = { subjectKind: "release", subjectId: releaseId, detail: { number } };
	await logEvent(trx, { personId, action: "release.published", ...subject });
	await queueJob(trx, "make_release_files", { releaseId }, { jobKey: filesJobKey(releaseId) });
	await queueFollowers(trx, releaseId, "revised");
	await queueJob(trx, "thank_growers", { releaseDraftId }, { jobKey: `thank_growers:${releaseDraftId}` });
	return outcome;
}

/** Publishes a draft at the minute that its approver set. One whose approval was taken back meanwhile is left alone. */
export async function publishAtItsMinute({ releaseDraftId }: { releaseDraftId: string }): Promise<void> {
	const outcome = await scopedTransaction({ kind: "network" }, async (trx) => {
		const draft = await trx
			.selectFrom("collect.release_draft")
			.select("decided_by")
			.where("release_draft_id", "=", releaseDraftId)
			.executeTakeFirst();
		return publishApproved(trx, releaseDraftId, draft?.decided_by ?? null);
	});
	log.info({ releaseDraftId, ...outcome }, "scheduled release");
	// The queue's clock is ahead of this one, the draft was changed by hand, or another survey of the season was published
	// since: tried again, and seen on the health page.
	if (["not_yet", "changed", "outdated"].includes(outcome.outcome)) throw new Error(outcome.outcome);
}
