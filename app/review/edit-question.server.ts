import { createHash, randomBytes } from "node:crypto";
import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Answer, FormDefinition } from "#app/collect/form.ts";
import type { Words } from "#app/lib/words.ts";
import { addStep } from "./save-findings.server.ts";

/** How long a grower can answer what a mail asks. */
export const answerDays = 60;

/**
 * Makes the link by which the grower answers, when its mail goes out: 256 random bits, of which the hash alone is kept.
 * @returns null where nothing is to be asked any more: it was decided meanwhile.
 */
export async function openQuestion(trx: Trx, mailingId: string): Promise<string | null> {
	const token = randomBytes(32).toString("base64url");
	const opened = await trx
		.updateTable("collect.edit_question as q")
		.from("collect.edit_finding as f")
		.whereRef("f.edit_finding_id", "=", "q.edit_finding_id")
		.where("q.mailing_id", "=", mailingId)
		.where("q.reply", "is", null)
		.where("f.outcome", "is", null)
		.set({ token_hash: hashOf(token), expires_at: sql`now() + make_interval(days => ${answerDays})` })
		.returning("q.edit_finding_id")
		.executeTakeFirst();
	return opened ? token : null;
}

/**
 * What the link of a mail asks, with the answers as they were odd. Looks only: mail scanners open links too. A link that is
 * not known, too old, or of answers that were taken back gives undefined.
 * @param trx under scope `network`, as nobody is known yet.
 */
export async function findAskedBy(trx: Trx, token: string) {
	if (!/^[A-Za-z0-9_-]{43}$/.test(token)) return undefined;
	return trx
		.selectFrom("collect.edit_question as q")
		.innerJoin("collect.edit_finding as f", "f.edit_finding_id", "q.edit_finding_id")
		.innerJoin("collect.response as r", "r.response_id", "f.response_id")
		.innerJoin("collect.survey as s", "s.survey_id", "r.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("directory.operation as o", "o.operation_id", "r.operation_id")
		.where("q.token_hash", "=", hashOf(token))
		.where("q.expires_at", ">", sql<Date>`now()`)
		.where("r.submitted_at", "is not", null)
		.where("o.status", "=", "active")
		.select([
			"q.edit_finding_id as findingId",
			"r.survey_id as surveyId",
			"r.response_id as responseId",
			"r.state_fips as stateFips",
			"r.language as responseLanguage",
			"o.name as operationName",
			"o.operation_id as operationId",
			"s.season",
			sql<Words>`s.title`.as("title"),
			sql<Answer[]>`f.about`.as("about"),
			sql<FormDefinition>`v.definition`.as("definition"),
			sql<"right" | "wrong" | null>`q.reply`.as("reply"),
			sql<boolean>`f.outcome is null`.as("isOpen"),
		])
		.executeTakeFirst();
}
export type Asked = NonNullable<Awaited<ReturnType<typeof findAskedBy>>>;

/** Keeps what the grower said, once: a second tap, and a second person with the mail, change nothing. */
export async function replyToQuestion(
	trx: Trx,
	{ findingId, surveyId, responseId, operationId, stateFips }: Asked,
	{ reply, words }: { reply: "right" | "wrong"; words: string },
): Promise<"kept" | "already"> {
	const kept = await trx
		.updateTable("collect.edit_question")
		.set({ reply, replied_at: sql`now()` })
		.where("edit_finding_id", "=", findingId)
		.where("reply", "is", null)
		.returning("edit_finding_id")
		.executeTakeFirst();
	if (!kept) return "already";
	await addStep(trx, { findingId, step: reply === "right" ? "said_right" : "said_wrong", personId: null, words });
	await logEvent(trx, {
		personId: null,
		action: "finding.replied",
		subjectKind: "edit_finding",
		subjectId: findingId,
		stateFips,
		detail: { surveyId, responseId, operationId, byLink: true },
	});
	return "kept";
}

function hashOf(token: string): string {
	return createHash("sha256").update(token).digest("base64url");
}
