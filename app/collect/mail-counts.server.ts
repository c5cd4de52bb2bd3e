import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { Mail } from "./mail-list.server.ts";
import type { MailingFailure } from "./survey-mailing.server.ts";

export type MailCount = {
	kind: Mail["kind"];
	/** Of reminders; 1 of all else. */
	wave: number;
	firstQueuedAt: Date;
	lastSentAt: Date | null;
	sent: number;
	waiting: number;
	failed: number;
	failures: { why: MailingFailure; count: number }[];
};

const order: Mail["kind"][] = ["invitation", "new_link", "reminder", "receipt", "question", "thank_you"];

/** What was mailed for a survey to growers of the viewer's states: a row a kind, and one a wave of reminders. */
export async function countMailsByKind(trx: Trx, viewer: Associate, surveyId: string): Promise<MailCount[]> {
	const rows = await trx
		.selectFrom("collect.mailing as m")
		.innerJoin("collect.frame_operation as f", (join) =>
			join.onRef("f.survey_id", "=", "m.survey_id").onRef("f.operation_id", "=", "m.operation_id"),
		)
		.where("m.survey_id", "=", surveyId)
		.where("f.state_fips", "in", viewer.stateFips)
		.select([
			sql<Mail["kind"]>`case when m.kind = 'invitation' and m.wave > 1 then 'new_link' else m.kind end`.as("kind"),
			sql<number>`case when m.kind = 'reminder' then m.wave else 1 end`.as("wave"),
			"m.failure",
			sql<Date>`min(m.queued_at)`.as("firstQueuedAt"),
			sql<Date | null>`max(m.sent_at)`.as("lastSentAt"),
			sql<number>`count(*) filter (where m.sent_at is not null)`.as("sent"),
			sql<number>`count(*) filter (where m.sent_at is null and m.failed_at is null)`.as("waiting"),
			sql<number>`count(*) filter (where m.failed_at is not null)`.as("failed"),
		])
		.groupBy([sql`1`, sql`2`, "m.failure"])
		.execute();
	const byKind = new Map<string, MailCount>();
	for (const { failure, ...row } of rows) {
		const key = `${row.kind} ${row.wave}`;
		const failures = failure ? [{ why: failure as MailingFailure, count: row.failed }] : [];
		const known = byKind.get(key);
		byKind.set(key, known ? joined(known, { ...row, failures }) : { ...row, failures });
	}
	return [...byKind.values()].toSorted((a, b) => order.indexOf(a.kind) - order.indexOf(b.kind) || a.wave - b.wave);
}

function joined(a: MailCount, b: MailCount): MailCount {
	const sent = [a.lastSentAt, b.lastSentAt].filter((at) => at !== null).toSorted((x, y) => y.getTime() - x.getTime());
	return {
		...a,
		firstQueuedAt: a.firstQueuedAt < b.firstQueuedAt ? a.firstQueuedAt : b.firstQueuedAt,
		lastSentAt: sent[0] ?? null,
		sent: a.sent + b.sent,
		waiting: a.waiting + b.waiting,
		failed: a.failed + b.failed,
		failures: [...a.failures, ...b.failures].toSorted((x, y) => y.count - x.count || x.why.localeCompare(y.why)),
	};
}
