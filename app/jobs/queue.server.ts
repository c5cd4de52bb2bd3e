import { sql } from "kysely";
import type { ReleaseChange } from "#app/auth/change-mailings.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Language } from "#app/i18n/language.ts";
import type { LetterKind } from "#app/mail/templates.ts";

/** Every kind of queued work with what it takes. Payloads hold ids only: no token, no address, no answer. */
export type JobPayloads = {
	send_mail: { mailingId: string };
	send_reminders: { surveyId: string; wave: number };
	send_sample: { surveyId: string; personId: string; kind: LetterKind; language: Language };
	thank_growers: { releaseDraftId: string };
	compute_release_draft: { releaseDraftId: string };
	publish_release: { releaseDraftId: string };
	/** The data files of a release, made once after it is published. */
	make_release_files: { releaseId: string };
	publish_report: { reportId: string };
	/** The PDF of a published report. */
	print_report: { reportId: string; language: Language };
	/** A published report to everybody who asked for such a one, and to one of them. */
	mail_report: { reportId: string };
	mail_subscriber: { reportId: string; subscriberId: string };
	/** What became of a release, to all who follow it, and to one of them. */
	tell_followers: { releaseId: string; change: ReleaseChange };
	tell_follower: { releaseId: string; change: ReleaseChange; followId: string };
	confirm_subscription: { requestId: string };
	sweep_subscriptions: Record<string, unknown>;
	/** An invitation to a role, and the notice that one ends soon; once a day, what grants have ended. */
	mail_invitation: { invitationId: string };
	tell_grant_end: { roleGrantId: string };
	watch_grant_ends: Record<string, unknown>;
	/** The files of photos that were taken away. */
	erase_photos: { fileNames: string[] };
	sweep_photos: Record<string, unknown>;
	/** One step of reading a list of growers in from a file. */
	import_growers: { importId: string; step: "read" | "check" | "write" | "undo" };
	sweep_imports: Record<string, unknown>;
	/** Looks for odd answers in one response, or in all of a survey. */
	check_answers: { surveyId: string; responseId: string | null };
	/** Every survey that is out or was lately: what is usual among neighbours changes as more of them answer. */
	check_surveys: Record<string, unknown>;
};

/** Queues work in the caller's transaction: neither the decision nor its job happens without the other. */
export async function queueJob<K extends keyof JobPayloads>(
	trx: Trx,
	task: K,
	payload: JobPayloads[K],
	options: { jobKey?: string; runAt?: Date; maxAttempts?: number; priority?: number } = {},
): Promise<void> {
	await sql`select graphile_worker.add_job(${task}::text, payload := ${JSON.stringify(payload)}::json,
		run_at := ${options.runAt ?? null}::timestamptz, max_attempts := ${options.maxAttempts ?? null}::int,
		job_key := ${options.jobKey ?? null}::text, priority := ${options.priority ?? 0}::int)`.execute(trx);
}

/** So many jobs of a batch have their turn before another batch has one. */
const perTurn = 50;
/** The queue keeps a small number: beyond this turn a batch's jobs are alike. */
const lastTurn = 1_000;

/**
 * Queues many jobs of a kind in turns: whatever is queued singly goes first, and a small batch, such as a word to the ten who
 * follow a release, waits for one turn of the thousand thank-yous queued before it, not for all of them.
 */
export async function queueBatch<K extends keyof JobPayloads>(
	trx: Trx,
	task: K,
	jobs: { payload: JobPayloads[K]; jobKey: string }[],
): Promise<void> {
	for (const [at, { payload, jobKey }] of jobs.entries()) {
		const turn = Math.floor(at / perTurn);
		await queueJob(trx, task, payload, { jobKey, priority: 1 + Math.min(turn, lastTurn) });
	}
}

/** Takes back work that has not begun; work that never was is no fault. */
export async function dropJob(trx: Trx, jobKey: string): Promise<void> {
	await sql`select graphile_worker.remove_job(${jobKey}::text)`.execute(trx);
}
