import { randomInt } from "node:crypto";
import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import { writeFacts } from "#app/tally/facts.server.ts";
import { findNewestSubmission, sameAnswers, type Submission } from "./answer-rows.server.ts";
import type { Answer } from "./form.ts";
import { queueMail } from "./mail-waves.server.ts";
import { findHindrance, type Hindrance } from "./progress.ts";
import { type AnswerPlace, type LockedAnswering as Locked, lockAnswering } from "./responses.server.ts";
import { keptAnswers } from "./steps.ts";

export type Submitted =
	| { outcome: "submitted" | "unchanged"; receiptCode: string; version: number }
	| Hindrance
	| "not_found"
	| "closed"
	| "not_started";

/**
 * Sends an operation's answers in, for the first time or amended. Snapshot, receipt, disposition, facts and the receipt's
 * mail come about together or not at all. What has not changed since it was last sent in gets the same receipt, so that a
 * double tap, a retry and a second tab are harmless. After the closing, what was begun before it is kept as late: it gets a
 * receipt that says so, and counts in no figure by itself.
 */
export async function submitResponse(
	trx: Trx,
	viewer: Grower,
	place: AnswerPlace,
	language: "en" | "es",
): Promise<Submitted> {
	const answering = await lockAnswering(trx, viewer, place);
	if (typeof answering === "string") return answering;
	return sendIn(trx, viewer, answering, { language, mode: "web" });
}

/** How a version came: on the web, or typed in by an associate. */
export type SentBy = { language: "en" | "es"; mode: "web" | "telephone" | "paper" };

/**
 * Sends in the answers of a response that the caller has locked.
 * @param viewer the person in it is who typed them in, where that was not on the web.
 */
export async function sendIn(trx: Trx, viewer: Grower, answering: Locked, by: SentBy): Promise<Submitted> {
	const { definition, plantings, response } = answering;
	const place: AnswerPlace = answering;
	const answers = keptAnswers(definition, plantings, answering.answers);
	const newest = await findNewestSubmission(trx, response.responseId);
	if (newest && response.receiptCode !== null && sameAnswers(newest.answers, answers))
		return { outcome: "unchanged", receiptCode: response.receiptCode, version: response.submittedVersion };
	const hindrance = findHindrance(answering);
	if (hindrance) return hindrance;

	const version = response.submittedVersion + 1;
	const receiptCode = response.receiptCode ?? newReceiptCode();
	const enteredBy = by.mode === "web" ? null : (viewer.person?.personId ?? null);
	await keepSubmission(trx, answering, answers, { ...by, version, receiptCode, enteredBy });
	if (answering.isOpen) await countIn(trx, place, response.responseId);
	await queueReceipt(trx, viewer, place, version);
	const late = !answering.isOpen;
	await logEvent(trx, {
		personId: viewer.person?.personId ?? null,
		action: version === 1 ? "response.submitted" : "response.amended",
		subjectKind: "response",
		subjectId: response.responseId,
		stateFips: answering.stateFips,
		detail: {
			surveyId: place.surveyId,
			operationId: place.operationId,
			version,
			late,
			byLink: viewer.link !== null,
			mode: by.mode,
		},
	});
	return { outcome: "submitted", receiptCode, version };
}

/** From here on the answers stand in the response rates and in the figures. */
export async function countIn(trx: Trx, { surveyId, operationId }: AnswerPlace, responseId: string): Promise<void> {
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "complete", disposition_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("disposition", "!=", "complete")
		.execute();
	await writeFacts(trx, responseId);
	await queueJob(trx, "check_answers", { surveyId, responseId }, { jobKey: `check_answers:${responseId}` });
}

async function keepSubmission(
	trx: Trx,
	{ plantings, isOpen, response: { responseId } }: Locked,
	answers: Answer[],
	sent: SentBy & { version: number; receiptCode: string; enteredBy: string | null },
): Promise<void> {
	const { version, receiptCode, language, mode, enteredBy } = sent;
	const submission: Submission = {
		plantings: plantings.map(({ plantingId, cropKey, bearingTrees }) => ({ plantingId, cropKey, bearingTrees })),
		answers,
	};
	await trx
		.insertInto("collect.submission")
		.values({
			response_id: responseId,
			version,
			answers: JSON.stringify(submission),
			late: !isOpen,
			mode,
			entered_by: enteredBy,
		})
		.execute();
	await trx
		.updateTable("collect.response")
		.set({
			submitted_version: version,
			receipt_code: receiptCode,
			...(isOpen
				? { first_submitted_at: sql`coalesce(first_submitted_at, now())`, submitted_at: sql`now()`, late_at: null }
				: { late_at: sql`now()` }),
			withdrawn_at: null,
			language,
			mode,
		})
		.where("response_id", "=", responseId)
		.execute();
}

/** None for an operation that no mail reaches: its receipt is on the screen. */
async function queueReceipt(trx: Trx, viewer: Grower, place: AnswerPlace, version: number): Promise<void> {
	const receipt = await trx
		.insertInto("collect.mailing")
		.columns(["survey_id", "operation_id", "kind", "wave", "queued_by"])
		.expression((eb) =>
			eb
				.selectFrom("directory.operation as o")
				.where("o.operation_id", "=", place.operationId)
				.where(sql<boolean>`coalesce(o.email, '') <> '' and o.mail_returned_at is null`)
				.select([
					sql<string>`${place.surveyId}::uuid`.as("survey_id"),
					"o.operation_id",
					sql<string>`'receipt'`.as("kind"),
					sql<number>`${version}::int`.as("wave"),
					sql<string | null>`${viewer.person?.personId ?? null}::uuid`.as("queued_by"),
				]),
		)
		.returning("mailing_id")
		.executeTakeFirst();
	if (receipt) await queueMail(trx, receipt.mailing_id);
}

/** Without what is misread on paper or over the telephone: 0 O Q, 1 I L, 5 S, 8 B, 2 Z, U V. */
const receiptAlphabet = "34679ACDEFGHJKMNPRTWXY";

/** A receipt's code as it is shown, like "KD7M-3XRA". It names a response to people; it opens nothing. */
function newReceiptCode(): string {
	const signs = Array.from({ length: 8 }, () => receiptAlphabet.charAt(randomInt(receiptAlphabet.length)));
	return `${signs.slice(0, 4).join("")}-${signs.slice(4).join("")}`;
}
