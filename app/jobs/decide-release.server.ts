import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Coordinator } from "#app/auth/viewer.ts";
import { momentIn } from "#app/collect/survey-closing.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { approveDraft, unscheduleDraft, withdrawRelease } from "#app/release/approval.server.ts";
import type { Decision } from "#app/release/decision.schema.ts";
import { type Draft, rejectDraft } from "#app/release/drafts.server.ts";
import { publishApproved, publishJobKey } from "./publish-release.server.ts";
import { dropJob, queueJob } from "./queue.server.ts";
import { queueFollowers } from "./tell-followers.server.ts";

/** Further ahead than two years is a slip of the hand. */
const FARTHEST_DAYS = 731;

/** What came of a decision: a key of `release:toast` with its number, a refusal, or a field to mend. */
export type Decided =
	| { done: "published" | "withdrawn"; number: number }
	| { done: "scheduled" | "unscheduled" | "rejected" }
	| {
			refused:
				| "not_found"
				| "not_waiting"
				| "not_yet"
				| "own_draft"
				| "changed"
				| "outdated"
				| "not_scheduled"
				| "already_withdrawn";
	  }
	| { problem: Problem };

/** Takes a coordinator's decision on a draft, with what it queues and logs, in the caller's transaction. */
export async function decideRelease(
	trx: Trx,
	viewer: Coordinator,
	draft: Draft,
	decision: Decision,
	now: Date,
): Promise<Decided> {
	switch (decision.decision) {
		case "publish":
			return publishNow(trx, viewer, draft, now);
		case "schedule":
			return schedule(trx, viewer, draft, decision, now);
		case "unschedule":
			return unschedule(trx, viewer, draft);
		case "reject":
			return reject(trx, viewer, draft, decision.note);
		case "withdraw":
			return withdraw(trx, viewer, draft, { en: decision.reasonEn, es: decision.reasonEs });
	}
}

async function publishNow(trx: Trx, viewer: Coordinator, draft: Draft, now: Date): Promise<Decided> {
	const { outcome } = await approveDraft(trx, viewer, draft.releaseDraftId, now);
	if (outcome !== "scheduled") return { refused: outcome };
	const published = await publishApproved(trx, draft.releaseDraftId, viewer.personId);
	return published.outcome === "published"
		? { done: "published", number: published.number }
		: { refused: published.outcome };
}

async function schedule(
	trx: Trx,
	viewer: Coordinator,
	draft: Draft,
	{ publishOn, publishAt }: Extract<Decision, { decision: "schedule" }>,
	now: Date,
): Promise<Decided> {
	const moment = momentIn(publishOn, publishAt, draft.timeZone);
	if (!moment) return { problem: { field: "publishOn", code: "date_wrong" } };
	if (moment <= now) return { problem: { field: "publishOn", code: "closing_past" } };
	if (moment.getTime() - now.getTime() > FARTHEST_DAYS * 86_400_000)
		return { problem: { field: "publishOn", code: "closing_far" } };
	const { releaseDraftId } = draft;
	const { outcome } = await approveDraft(trx, viewer, releaseDraftId, moment);
	if (outcome !== "scheduled") return { refused: outcome };
	await queueJob(trx, "publish_release", { releaseDraftId }, { jobKey: publishJobKey(releaseDraftId), runAt: moment });
	await note(trx, viewer, "release.scheduled", draft, { at: moment.toISOString() });
	return { done: "scheduled" };
}

async function unschedule(trx: Trx, viewer: Coordinator, draft: Draft): Promise<Decided> {
	const outcome = await unscheduleDraft(trx, viewer, draft.releaseDraftId);
	if (outcome === "not_scheduled") return { refused: outcome };
	await dropJob(trx, publishJobKey(draft.releaseDraftId));
	await note(trx, viewer, "release.unscheduled", draft);
	return { done: outcome };
}

async function reject(trx: Trx, viewer: Coordinator, draft: Draft, why: string): Promise<Decided> {
	const outcome = await rejectDraft(trx, viewer, draft.releaseDraftId, why);
	if (outcome === "not_waiting") return { refused: outcome };
	await note(trx, viewer, "release.rejected", draft);
	return { done: outcome };
}

async function withdraw(
	trx: Trx,
	viewer: Coordinator,
	{ releaseId }: Draft,
	reason: { en: string; es: string },
): Promise<Decided> {
	if (!releaseId) return { refused: "not_found" };
	const withdrawn = await withdrawRelease(trx, viewer, releaseId, reason);
	if (withdrawn.outcome !== "withdrawn") return { refused: withdrawn.outcome };
	const { number } = withdrawn;
	const subject = { subjectKind: "release", subjectId: releaseId, detail: { number } };
	await logEvent(trx, { personId: viewer.personId, action: "release.withdrawn", ...subject });
	await queueFollowers(trx, releaseId, "withdrawn");
	return { done: "withdrawn", number };
}

type DraftAction = "release.scheduled" | "release.unscheduled" | "release.rejected";

async function note(
	trx: Trx,
	{ personId }: Coordinator,
	action: DraftAction,
	{ releaseDraftId }: Draft,
	detail: Record<string, string> = {},
) {
	await logEvent(trx, { personId, action, subjectKind: "release_draft", subjectId: releaseDraftId, detail });
}
