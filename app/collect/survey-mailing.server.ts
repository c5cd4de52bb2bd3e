import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Words } from "./form.ts";
import { markReturned } from "./reach.server.ts";

export type MailKind = "invitation" | "reminder" | "receipt" | "thank_you" | "question";

/** Why a mailing was given up: each has words on the desk's pages (`desk:mail_failure.<code>`). */
export type MailingFailure =
	| "returned"
	| "no_address"
	| "not_wanted"
	| "answered"
	| "not_answered"
	| "survey_closed"
	| "replaced"
	/** Refused, not eligible, or out of the network. */
	| "not_asked"
	/** The process or the connection ended while the server had the mail: it may have gone out, and is not sent twice. */
	| "uncertain"
	/** An associate had decided about the answer before its grower was asked. */
	| "decided"
	/** The mail server took nothing for days. */
	| "server_away";

/** What sending one mailing needs to know, under scope network. @returns undefined for an unknown id. */
export async function findMailing(trx: Trx, mailingId: string) {
	const row = await trx
		.selectFrom("collect.mailing as m")
		.innerJoin("collect.survey as s", "s.survey_id", "m.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("directory.operation as o", "o.operation_id", "m.operation_id")
		.innerJoin("directory.state as d", "d.state_fips", "o.state_fips")
		.innerJoin("collect.frame_operation as f", (join) =>
			join.onRef("f.survey_id", "=", "m.survey_id").onRef("f.operation_id", "=", "m.operation_id"),
		)
		.leftJoin("collect.response as r", (join) =>
			join.onRef("r.survey_id", "=", "m.survey_id").onRef("r.operation_id", "=", "m.operation_id"),
		)
		.where("m.mailing_id", "=", mailingId)
		.select((eb) => [
			"m.mailing_id",
			"m.survey_id",
			"m.operation_id",
			"m.kind",
			"m.wave",
			"m.tried_at",
			"m.sent_at",
			"m.failed_at",
			"f.disposition",
			"s.season",
			"s.title",
			"s.closes_at",
			sql<number>`(v.definition ->> 'minutes')::int`.as("minutes"),
			sql<boolean>`s.opened_at is not null and s.closed_at is null and s.closes_at > now()`.as("is_open"),
			"o.name as operation_name",
			"o.contact_name",
			"o.email",
			"o.county_fips",
			"o.mail_returned_at",
			"o.mail_wanted",
			"o.status",
			"o.language",
			"d.time_zone",
			"r.language as response_language",
			"r.receipt_code",
			"r.submitted_at",
			"r.late_at",
			"r.withdrawn_at",
			// A new link was asked for after this one was queued: sending it would bring the older mail to life again.
			eb
				.exists(
					eb
						.selectFrom("collect.mailing as n")
						.select(sql`1`.as("one"))
						.whereRef("n.survey_id", "=", "m.survey_id")
						.whereRef("n.operation_id", "=", "m.operation_id")
						.where("n.kind", "=", "invitation")
						.where("n.wave", ">", 1)
						.whereRef("n.queued_at", ">", "m.queued_at"),
				)
				.as("replaced"),
		])
		.executeTakeFirst();
	return row && { ...row, kind: row.kind as MailKind, title: row.title as Words };
}
export type Mailing = NonNullable<Awaited<ReturnType<typeof findMailing>>>;

/**
 * Why this mailing must not go out any more, if so. A receipt goes to whoever has an address: it was asked for by sending
 * in, and tells what was received.
 */
export function reasonNotToSend(mailing: Mailing): MailingFailure | null {
	if (!mailing.email) return "no_address";
	if (mailing.mail_returned_at) return "returned";
	if (mailing.kind === "receipt") return null;
	if (!mailing.mail_wanted) return "not_wanted";
	if (mailing.status === "left") return "not_asked";
	// Asked of who has answered, and after the closing too.
	if (mailing.kind === "question") return mailing.submitted_at ? null : "not_answered";
	if (mailing.kind === "thank_you") return mailing.submitted_at ? null : "not_answered";
	if (mailing.submitted_at || mailing.withdrawn_at) return "answered";
	if (!mailing.is_open) return "survey_closed";
	if (mailing.disposition === "refused" || mailing.disposition === "not_eligible") return "not_asked";
	if (mailing.replaced) return "replaced";
	return null;
}

/**
 * Takes the mailing for one attempt, until the transaction ends or its process dies; whoever comes meanwhile leaves it.
 * A lock beside the row and not on it, since that the attempt began is written on the row and must outlive the process.
 */
export async function takeMailing(trx: Trx, mailingId: string): Promise<boolean> {
	const { rows } = await sql<{ taken: boolean }>`select
		pg_try_advisory_xact_lock(hashtextextended(${`send_mail:${mailingId}`}, 0)) as taken`.execute(trx);
	return rows[0]?.taken === true;
}

/** Notes that the mail server is about to get it, or (false) that it surely took nothing. */
export async function markMailingTried(trx: Trx, mailingId: string, tried: boolean): Promise<void> {
	await trx
		.updateTable("collect.mailing")
		.set({ tried_at: tried ? sql`now()` : null })
		.where("mailing_id", "=", mailingId)
		.execute();
}

export async function markMailingSent(trx: Trx, mailingId: string, messageId: string): Promise<void> {
	await trx
		.updateTable("collect.mailing")
		.set({ sent_at: sql`now()`, message_id: messageId })
		.where("mailing_id", "=", mailingId)
		.execute();
}

/**
 * Gives a mailing up. An address that took no mail is marked, and its operation undeliverable, for the desk to mend: first, since
 * whoever mends an address writes on the operation before its frames, and a mailing given up writes on its frame.
 */
export async function markMailingFailed(trx: Trx, mailing: Mailing, failure: MailingFailure): Promise<void> {
	const { survey_id: surveyId, operation_id: operationId } = mailing;
	if (failure === "returned") await markReturned(trx, { surveyId, operationId, email: mailing.email ?? "" });
	await trx
		.updateTable("collect.mailing")
		.set({ failed_at: sql`now()`, failure })
		.where("mailing_id", "=", mailing.mailing_id)
		.where("sent_at", "is", null)
		.execute();
}
