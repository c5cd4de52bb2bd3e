import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { queueBatch, queueJob } from "#app/jobs/queue.server.ts";

export type WaveKind = "invitation" | "reminder" | "thank_you";
export type Wave = {
	surveyId: string;
	kind: WaveKind;
	/** Of reminders and thank-yous. An invitation takes the next of each operation: a first one may have come back. */
	wave: number;
	/** In which states; a job works for all of them, under scope `network`. */
	states: readonly string[] | "all";
	queuedBy: string | null;
	/** Of these operations alone, where some were chosen. */
	only?: string[];
};

// Conditions on `collect.frame_operation f` joined with `directory.operation o`: the one place that says who gets mail.
export const answered = sql<boolean>`exists (select from collect.response r where r.survey_id = f.survey_id
	and r.operation_id = f.operation_id and r.submitted_at is not null)`;
/** Has an address that takes mail, and wants some. */
const reachable = sql<boolean>`(coalesce(o.email, '') <> '' and o.mail_returned_at is null and o.mail_wanted and o.status = 'active')`;
/**
 * Can be written to, has not answered (who has is `complete`), and has neither refused nor been found to be out of the survey.
 * With these dispositions as its index has them: a whole frame is counted by it.
 */
const awaited = sql<boolean>`(${reachable} and f.disposition in ('not_reached', 'reached', 'partial'))`;

export const mailConditions = {
	isAwaited: awaited,
	/** Has no invitation on its way, and none that was sent and not given up. */
	isUninvited: sql<boolean>`(not f.is_invited)`,
	/** A reminder reminds of an invitation that went out: after an outage it does not overtake one that still waits. */
	wentOut: sql<boolean>`f.invitation_went_out`,
	/** Has not answered. */
	isIncomplete: sql<boolean>`(f.disposition <> 'complete')`,
	/** Cannot be written to by mail, and is still in the list. */
	hasNoAddress: sql<boolean>`(coalesce(o.email, '') = '' and o.left_at is null)`,
};

const recipients: Record<WaveKind, ReturnType<typeof sql<boolean>>> = {
	invitation: sql<boolean>`(${awaited} and ${mailConditions.isUninvited})`,
	reminder: sql<boolean>`(${awaited} and ${mailConditions.wentOut})`,
	thank_you: sql<boolean>`(${reachable} and ${answered})`,
};

/**
 * Writes a mailing for everyone whom this wave concerns and queues its job, in the caller's transaction. Who has a mailing
 * of that wave already gets no second. @returns how many.
 */
export async function queueWave(trx: Trx, { surveyId, kind, wave, states, queuedBy, only }: Wave): Promise<number> {
	const own = sql<number>`(select coalesce(max(m.wave), 0) + 1 from collect.mailing m where m.survey_id = f.survey_id
		and m.operation_id = f.operation_id and m.kind = 'invitation')`;
	const mailings = await trx
		.insertInto("collect.mailing")
		.columns(["survey_id", "operation_id", "kind", "wave", "queued_by"])
		.expression((eb) =>
			eb
				.selectFrom("collect.frame_operation as f")
				.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
				.where("f.survey_id", "=", surveyId)
				.$if(states !== "all", (query) => query.where("f.state_fips", "in", [...states]))
				.where(recipients[kind])
				.$if(only !== undefined, (query) => query.where(sql<boolean>`f.operation_id = any (${only}::uuid[])`))
				.orderBy("f.operation_id")
				.select([
					"f.survey_id",
					"f.operation_id",
					sql<string>`${kind}::text`.as("kind"),
					(kind === "invitation" ? own : sql<number>`${wave}::int`).as("wave"),
					sql<string | null>`${queuedBy}::uuid`.as("queued_by"),
				]),
		)
		.onConflict((conflict) => conflict.constraint("mailing_once").doNothing())
		.returning("mailing_id")
		.execute();
	const jobs = mailings.map(({ mailing_id }) => jobOf(mailing_id));
	await queueBatch(trx, "send_mail", jobs);
	return mailings.length;
}

export function queueMail(trx: Trx, mailingId: string): Promise<void> {
	const { payload, jobKey } = jobOf(mailingId);
	return queueJob(trx, "send_mail", payload, { jobKey });
}

const jobOf = (mailingId: string) => ({ payload: { mailingId }, jobKey: `send_mail:${mailingId}` });

/** The last wave of a kind that was queued, as far as the transaction sees: 0 when none was. */
export async function lastWave(trx: Trx, surveyId: string, kind: WaveKind, operationId?: string): Promise<number> {
	const row = await trx
		.selectFrom("collect.mailing")
		.where("survey_id", "=", surveyId)
		.where("kind", "=", kind)
		.$if(operationId !== undefined, (query) => query.where("operation_id", "=", operationId!))
		.select(sql<number>`coalesce(max(wave), 0)`.as("wave"))
		.executeTakeFirstOrThrow();
	return row.wave;
}
