import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Language } from "#app/i18n/language.ts";
import { isWanted, type Subject, type Subscription } from "./choice.ts";

/** How long a request waits for its button to be pressed. */
const waitingDays = 2;

/** Notes what somebody asked for. It counts for nothing yet: anybody can type anybody's address. */
export async function addRequest(trx: Trx, { email, language, crops, states }: Subscription): Promise<string> {
	const { request_id } = await trx
		.insertInto("readership.request")
		.values({ email, language, crop_keys: crops, state_fips: states })
		.returning("request_id")
		.executeTakeFirstOrThrow();
	return request_id;
}

export type WaitingRequest = { requestId: string; email: string; language: Language };

export async function findRequest(trx: Trx, requestId: string): Promise<WaitingRequest | undefined> {
	const row = await trx
		.selectFrom("readership.request")
		.select(["request_id", "email", "language"])
		.where("request_id", "=", requestId)
		.where("requested_at", ">", sql<Date>`now() - make_interval(days => ${waitingDays})`)
		.executeTakeFirst();
	return row && { requestId: row.request_id, email: row.email, language: row.language as Language };
}

/** Whoever read the mail confirms: the choice counts from now on, in place of an earlier one, and the request is gone. */
export async function confirmRequest(trx: Trx, requestId: string): Promise<"confirmed" | "not_found"> {
	if (!(await findRequest(trx, requestId))) return "not_found";
	const asked = await trx
		.deleteFrom("readership.request")
		.where("request_id", "=", requestId)
		.returning(["email", "language", "crop_keys", "state_fips"])
		.executeTakeFirst();
	if (!asked) return "not_found";
	await sql`insert into readership.subscriber (email, language, crop_keys, state_fips)
		values (${asked.email}, ${asked.language}, ${asked.crop_keys}, ${asked.state_fips})
		on conflict (lower(email)) do update set language = excluded.language, crop_keys = excluded.crop_keys,
			state_fips = excluded.state_fips, confirmed_at = now()`.execute(trx);
	return "confirmed";
}

/** Forgets requests that nobody confirmed. */
export async function sweepRequests(trx: Trx): Promise<void> {
	await trx
		.deleteFrom("readership.request")
		.where("requested_at", "<", sql<Date>`now() - make_interval(days => ${waitingDays})`)
		.execute();
}

export type Subscriber = { subscriberId: string; email: string; language: Language };

export async function findSubscriber(trx: Trx, subscriberId: string): Promise<Subscriber | undefined> {
	const row = await trx
		.selectFrom("readership.subscriber")
		.select(["subscriber_id", "email", "language"])
		.where("subscriber_id", "=", subscriberId)
		.executeTakeFirst();
	return row && { subscriberId: row.subscriber_id, email: row.email, language: row.language as Language };
}

/** Forgets an address altogether, with the notes of what was sent to it. Twice is harmless. */
export async function removeSubscriber(trx: Trx, subscriberId: string): Promise<void> {
	await trx.deleteFrom("readership.subscriber").where("subscriber_id", "=", subscriberId).execute();
}

/** Notes one mailing for everybody who asked for such a report and has none of it yet. @returns those subscribers' ids. */
export async function addMailings(trx: Trx, reportId: string, subject: Subject): Promise<string[]> {
	const all = await trx
		.selectFrom("readership.subscriber")
		.select(["subscriber_id", "crop_keys", "state_fips"])
		.orderBy("subscriber_id")
		.execute();
	const wanted = all.filter((one) => isWanted({ crops: one.crop_keys, states: one.state_fips }, subject));
	if (wanted.length === 0) return [];
	const added = await trx
		.insertInto("readership.mailing")
		.values(wanted.map(({ subscriber_id }) => ({ report_id: reportId, subscriber_id })))
		.onConflict((conflict) => conflict.doNothing())
		.returning("subscriber_id")
		.execute();
	return added.map(({ subscriber_id }) => subscriber_id);
}

export type ReportMailing = Subscriber & { triedAt: Date | null };

/** A mailing that is still to be sent; nothing where it was, or where the address is gone. */
export async function findMailing(
	trx: Trx,
	reportId: string,
	subscriberId: string,
): Promise<ReportMailing | undefined> {
	const row = await trx
		.selectFrom("readership.mailing as m")
		.innerJoin("readership.subscriber as s", "s.subscriber_id", "m.subscriber_id")
		.select(["s.subscriber_id", "s.email", "s.language", "m.tried_at"])
		.where("m.report_id", "=", reportId)
		.where("m.subscriber_id", "=", subscriberId)
		.where("m.sent_at", "is", null)
		.where("m.failed_as", "is", null)
		.executeTakeFirst();
	return (
		row && {
			subscriberId: row.subscriber_id,
			email: row.email,
			language: row.language as Language,
			triedAt: row.tried_at,
		}
	);
}

type MailingState = { tried?: boolean; sent?: true; failed?: "returned" | "uncertain" | "server_away" };

export async function markMailing(
	trx: Trx,
	reportId: string,
	subscriberId: string,
	{ tried, sent, failed }: MailingState,
): Promise<void> {
	await trx
		.updateTable("readership.mailing")
		.set({
			...(tried !== undefined && { tried_at: tried ? sql`now()` : null }),
			...(sent && { sent_at: sql`now()` }),
			...(failed && { failed_as: failed }),
		})
		.where("report_id", "=", reportId)
		.where("subscriber_id", "=", subscriberId)
		.execute();
}
