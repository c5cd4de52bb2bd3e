import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { LogAction } from "#app/auth/log-actions.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { planReminders, type SetAlarm } from "#app/collect/reminders.server.ts";
import { type Season, zone as timeZone } from "./seasons.ts";

/** The mail of a survey, as if it had been sent: invitations, reminders to those who had not answered by then, receipts. */
export async function fillMailings(trx: Trx, associate: Associate, season: Season, now: Date): Promise<void> {
	const { surveyId, openedAt, reminders } = season;
	await sendWave(trx, associate, surveyId, "invitation", 1, openedAt);
	const sent = reminders.filter((at) => at < now);
	await setReminders(trx, associate, season, sent);
	for (const [i, at] of sent.entries()) await sendWave(trx, associate, surveyId, "reminder", i + 1, at);
	await sendReceipts(trx, surveyId);
	await note(trx, associate, surveyId, "survey.invited", openedAt);
	for (const at of sent) await note(trx, associate, surveyId, "survey.reminded", at);
	if (season.closedAt) return;
	await linkInvitations(trx, season);
	await markReturned(trx, season);
}

/** Addresses that took no mail this season are still to be mended; those of earlier ones have been. */
async function markReturned(trx: Trx, { surveyId }: Season): Promise<void> {
	await sql`update directory.operation o set mail_returned_at = m.failed_at from collect.mailing m
		where m.survey_id = ${surveyId} and m.operation_id = o.operation_id and m.failure = 'returned'`.execute(trx);
}

/** The seed has no right to the queue: the worker sets all alarms when it starts. */
export const noAlarm: SetAlarm = async () => {};

/** Reminders that went keep their times; those of the open survey are set anew, as its opening was moved back in time. */
async function setReminders(trx: Trx, { personId }: Associate, season: Season, sent: Date[]): Promise<void> {
	const { surveyId, openedAt, closesAt, closedAt } = season;
	if (!closedAt) return planReminders(trx, { surveyId, closesAt, timeZone }, personId, { openedAt, setAlarm: noAlarm });
	for (const [i, at] of sent.entries()) {
		await sql`update collect.reminder set remind_at = ${at}, sent_at = ${at}, set_at = ${openedAt}
			where survey_id = ${surveyId} and wave = ${i + 1}`.execute(trx);
	}
}

/** One mail every fifth of a second; an address that takes none gives the first one up and gets no other. */
async function sendWave(
	trx: Trx,
	associate: Associate,
	surveyId: string,
	kind: "invitation" | "reminder",
	wave: number,
	at: Date,
): Promise<void> {
	await sql`insert into collect.mailing (survey_id, operation_id, kind, wave, queued_by, queued_at, sent_at, message_id, failed_at, failure)
		select survey_id, operation_id, ${kind}, ${wave}, ${associate.personId}, ${at},
			case when reached then moment end, case when reached then '<' || gen_random_uuid() || '@fourrivers.example>' end,
			case when not reached then moment end, case when not reached then 'returned' end
		from (select f.survey_id, f.operation_id, f.disposition <> 'undeliverable' as reached,
				${at}::timestamptz + row_number() over (order by f.operation_id) * interval '0.2 seconds' as moment
			from collect.frame_operation f
			left join collect.response r using (survey_id, operation_id)
			where f.survey_id = ${surveyId} and (${kind} = 'invitation' or not (f.disposition = 'undeliverable'
				or f.disposition in ('refused', 'not_eligible') and f.disposition_at < ${at}
				or coalesce(r.first_submitted_at < ${at}, false)))) m`.execute(trx);
}

/** A receipt for each time that somebody answered on the web. */
async function sendReceipts(trx: Trx, surveyId: string): Promise<void> {
	await sql`insert into collect.mailing (survey_id, operation_id, kind, wave, queued_at, sent_at, message_id)
		select r.survey_id, r.operation_id, 'receipt', s.version, s.submitted_at, s.submitted_at + interval '2 seconds',
			'<' || gen_random_uuid() || '@fourrivers.example>'
		from collect.response r join collect.submission s using (response_id)
		where r.survey_id = ${surveyId} and r.mode = 'web'`.execute(trx);
}

/** The links that went out with the open survey's invitations. Nobody knows their tokens: a reminder brings a new one. */
async function linkInvitations(trx: Trx, { surveyId, closesAt }: Season): Promise<void> {
	await sql`insert into collect.personal_link (survey_id, operation_id, mailing_id, token_hash, created_at, expires_at, first_opened_at)
		select m.survey_id, m.operation_id, m.mailing_id, encode(sha256(gen_random_uuid()::text::bytea), 'hex'), m.sent_at,
			${closesAt}, r.started_at
		from collect.mailing m left join collect.response r on r.survey_id = m.survey_id
			and r.operation_id = m.operation_id and r.mode = 'web'
		where m.survey_id = ${surveyId} and m.kind = 'invitation' and m.sent_at is not null`.execute(trx);
}

async function note(trx: Trx, { personId }: Associate, surveyId: string, action: LogAction, at: Date): Promise<void> {
	await logEvent(trx, { personId, action, subjectKind: "survey", subjectId: surveyId });
	await sql`update log.event set happened_at = ${at} where event_id = (select max(event_id) from log.event)`.execute(
		trx,
	);
}
