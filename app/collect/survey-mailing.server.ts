import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Words } from "./form.ts";

/** Why a mailing was given up: each has words on the desk's pages (`desk:mail_failure.<code>`). */
export type MailingFailure = "returned" | "no_address" | "not_wanted" | "answered" | "survey_closed" | "replaced";

/** What sending one mailing needs to know, under scope network. @returns undefined for an unknown id. */
export async function findMailing(trx: Trx, mailingId: string) {
	const row = await trx
		.selectFrom("collect.mailing as m")
		.innerJoin("collect.survey as s", "s.survey_id", "m.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("directory.operation as o", "o.operation_id", "m.operation_id")
		.innerJoin("directory.state as d", "d.state_fips", "o.state_fips")
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
			"m.sent_at",
			"m.failed_at",
			"s.season",
			"s.title",
			"s.closes_at",
			sql<number>`(v.definition ->> 'minutes')::int`.as("minutes"),
			sql<boolean>`s.opened_at is not null and s.closed_at is null and s.closes_at > now()`.as("is_open"),
			"o.name as operation_name",
			"o.contact_name",
			"o.email",
			"o.mail_wanted",
			"o.language",
			"d.time_zone",
			"r.language as response_language",
			"r.receipt_code",
			"r.submitted_at",
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
	return row && { ...row, kind: row.kind as "invitation" | "reminder" | "receipt", title: row.title as Words };
}
export type Mailing = NonNullable<Awaited<ReturnType<typeof findMailing>>>;

/** Why this mailing must not go out any more, if so. A receipt always goes: it tells what was received. */
export function reasonNotToSend(mailing: Mailing): MailingFailure | null {
	if (!mailing.email) return "no_address";
	if (mailing.kind === "receipt") return null;
	if (!mailing.mail_wanted) return "not_wanted";
	if (mailing.submitted_at || mailing.withdrawn_at) return "answered";
	if (!mailing.is_open) return "survey_closed";
	if (mailing.replaced) return "replaced";
	return null;
}

/** Takes the mailing for sending until the transaction ends. @returns false when it was sent or given up meanwhile. */
export async function lockUnsentMailing(trx: Trx, mailingId: string): Promise<boolean> {
	// Weaker than FOR UPDATE, so that writing a link of this mailing need not wait for the mail server.
	const row = await trx
		.selectFrom("collect.mailing")
		.select(["sent_at", "failed_at"])
		.where("mailing_id", "=", mailingId)
		.forNoKeyUpdate()
		.executeTakeFirst();
	return row !== undefined && row.sent_at === null && row.failed_at === null;
}

export async function markMailingSent(trx: Trx, mailingId: string, messageId: string): Promise<void> {
	await trx
		.updateTable("collect.mailing")
		.set({ sent_at: sql`now()`, message_id: messageId })
		.where("mailing_id", "=", mailingId)
		.execute();
}

/** Gives a mailing up. An address that took no mail also leaves its operation undeliverable, for the desk to mend. */
export async function markMailingFailed(trx: Trx, mailing: Mailing, failure: MailingFailure): Promise<void> {
	await trx
		.updateTable("collect.mailing")
		.set({ failed_at: sql`now()`, failure })
		.where("mailing_id", "=", mailing.mailing_id)
		.execute();
	if (failure !== "returned") return;
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "undeliverable", disposition_at: sql`now()` })
		.where("survey_id", "=", mailing.survey_id)
		.where("operation_id", "=", mailing.operation_id)
		.where("disposition", "=", "not_reached")
		.execute();
}
