import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { dropJob, queueJob } from "#app/jobs/queue.server.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { queueWave } from "./mail-waves.server.ts";
import { type ReminderForm, reminderFields, reminderWaves } from "./reminder.schema.ts";
import { usualReminders } from "./reminder-times.ts";
import { momentIn } from "./survey-closing.ts";
import { findSurvey } from "./surveys.server.ts";

export type Reminder = { wave: number; remindAt: Date; sentAt: Date | null; cancelledAt: Date | null };

/** Has the queue ring when a reminder's time comes; set again, it moves. */
export type SetAlarm = (trx: Trx, surveyId: string, wave: number, at: Date) => Promise<void>;

export const queueAlarm: SetAlarm = (trx, surveyId, wave, at) =>
	queueJob(trx, "send_reminders", { surveyId, wave }, { jobKey: jobKey(surveyId, wave), runAt: at });

/** Sets the two reminders of a survey that is being opened, at the usual times. */
export async function planReminders(
	trx: Trx,
	survey: { surveyId: string; closesAt: Date; timeZone: string },
	personId: string,
	{ openedAt = new Date(), setAlarm = queueAlarm }: { openedAt?: Date; setAlarm?: SetAlarm } = {},
): Promise<void> {
	const times = usualReminders(openedAt, survey.closesAt, survey.timeZone);
	for (const wave of reminderWaves) {
		await setTime(trx, survey.surveyId, wave, times[wave - 1]!, personId);
		await setAlarm(trx, survey.surveyId, wave, times[wave - 1]!);
	}
}

/** Sets every alarm anew that is still to ring: none is missing after a restore, or in a database that was filled by hand. */
export async function setAllAlarms(trx: Trx): Promise<void> {
	const standing = await trx
		.selectFrom("collect.reminder")
		.select(["survey_id", "wave", "remind_at"])
		.where("sent_at", "is", null)
		.where("cancelled_at", "is", null)
		.execute();
	for (const { survey_id, wave, remind_at } of standing) await queueAlarm(trx, survey_id, wave, remind_at);
}

/** The reminders of a survey with their times, for whoever may see the survey. */
export async function listReminders(trx: Trx, viewer: Associate, surveyId: string): Promise<Reminder[]> {
	if (!(await findSurvey(trx, viewer, surveyId))) return [];
	return selectReminders(trx, surveyId).orderBy("wave").execute();
}

function selectReminders(trx: Trx, surveyId: string) {
	return trx
		.selectFrom("collect.reminder")
		.select(["wave", "remind_at as remindAt", "sent_at as sentAt", "cancelled_at as cancelledAt"])
		.where("survey_id", "=", surveyId);
}

/**
 * Moves reminders that have not gone yet, and calls off those whose day and time were emptied. One that went in the
 * meantime stays as it is.
 */
export async function setReminders(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	form: ReminderForm,
	now = new Date(),
) {
	const survey = await findSurvey(trx, viewer, surveyId);
	if (!survey) return "not_found" as const;
	if (survey.state !== "open") return "not_open" as const;
	if (!survey.mayManage) return "states_not_held" as const;
	const standing = await selectReminders(trx, surveyId).forUpdate().execute();
	const sent = standing.filter(({ sentAt }) => sentAt !== null);
	const open = reminderWaves.filter((wave) => !sent.some((reminder) => reminder.wave === wave));

	const times = new Map<number, Date | null>();
	const problems: Problem[] = [];
	let earliest = new Date(0);
	for (const wave of open) {
		const stands = standing.find((reminder) => reminder.wave === wave && !reminder.cancelledAt)?.remindAt;
		const read = readTime(form, wave, survey.timeZone, { after: earliest, now, before: survey.closesAt, stands });
		if ("problem" in read) problems.push(read.problem);
		else times.set(wave, read.at);
		if ("at" in read && read.at) earliest = read.at;
	}
	if (problems.length > 0) return { problems };
	for (const [wave, at] of times) {
		const same = standing.find((reminder) => reminder.wave === wave && !reminder.cancelledAt);
		if (same ? same.remindAt.getTime() === at?.getTime() : at === null) continue;
		if (at) {
			await setTime(trx, surveyId, wave, at, viewer.personId);
			await queueAlarm(trx, surveyId, wave, at);
		} else await callOff(trx, surveyId, wave, viewer.personId);
	}
	await logEvent(trx, {
		personId: viewer.personId,
		action: "survey.reminders_set",
		subjectKind: "survey",
		subjectId: surveyId,
		detail: Object.fromEntries([...times].map(([wave, at]) => [`wave${wave}`, at?.toISOString() ?? null])),
	});
	return "set" as const;
}

/** A time that `stands` may have come while the page was open: saving the other reminder does not fault it. */
type Bounds = { after: Date; now: Date; before: Date; stands: Date | undefined };

function readTime(
	form: ReminderForm,
	wave: 1 | 2,
	timeZone: string,
	{ after, now, before, stands }: Bounds,
): { at: Date | null } | { problem: Problem } {
	const fields = reminderFields[wave];
	const [on, at] = [form[fields.on], form[fields.at]];
	if (on === undefined && at === undefined) return { at: null };
	if (on === undefined) return { problem: { field: fields.on, code: "empty" } };
	if (at === undefined) return { problem: { field: fields.at, code: "empty" } };
	const moment = momentIn(on, at, timeZone);
	if (!moment) return { problem: { field: fields.on, code: "date_wrong" } };
	const asItStands = moment.getTime() === stands?.getTime();
	if (moment <= now && !asItStands) return { problem: { field: fields.on, code: "closing_past" } };
	if (moment <= after) return { problem: { field: fields.on, code: "reminder_order" } };
	if (moment >= before) return { problem: { field: fields.on, code: "reminder_late" } };
	return { at: moment };
}

/** The row is what counts; the queued job only wakes somebody up to look at it. */
async function setTime(trx: Trx, surveyId: string, wave: number, remindAt: Date, personId: string): Promise<void> {
	const values = { remind_at: remindAt, set_by: personId, set_at: sql<Date>`now()`, cancelled_at: null };
	await trx
		.insertInto("collect.reminder")
		.values({ survey_id: surveyId, wave, ...values })
		.onConflict((conflict) => conflict.columns(["survey_id", "wave"]).doUpdateSet(values))
		.execute();
}

async function callOff(trx: Trx, surveyId: string, wave: number, personId: string): Promise<void> {
	await trx
		.updateTable("collect.reminder")
		.set({ cancelled_at: sql`now()`, set_by: personId, set_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("wave", "=", wave)
		.execute();
	await dropJob(trx, jobKey(surveyId, wave));
}

const jobKey = (surveyId: string, wave: number) => `send_reminders:${surveyId}:${wave}`;

/**
 * Queues a reminder of one wave for everyone who is still awaited, when its time has come: to growers whom an associate
 * reminded by hand of that wave already, it does not go again. Called early, it sets the clock anew; for a survey that has
 * closed it ends unsent.
 * @param trx under scope `network`: a survey's reminder goes to all its states.
 */
export async function sendDueReminder(trx: Trx, surveyId: string, wave: number, now = new Date()): Promise<number> {
	const reminder = await selectReminders(trx, surveyId).where("wave", "=", wave).forUpdate().executeTakeFirst();
	if (!reminder || reminder.sentAt || reminder.cancelledAt) return 0;
	if (reminder.remindAt > now) {
		await queueAlarm(trx, surveyId, wave, reminder.remindAt);
		return 0;
	}
	const survey = await trx
		.selectFrom("collect.survey")
		.select(["closes_at", "closed_at", "opened_at"])
		.where("survey_id", "=", surveyId)
		.executeTakeFirstOrThrow();
	const isOpen = survey.opened_at !== null && survey.closed_at === null && survey.closes_at > now;
	await trx
		.updateTable("collect.reminder")
		.set(isOpen ? { sent_at: now } : { cancelled_at: now })
		.where("survey_id", "=", surveyId)
		.where("wave", "=", wave)
		.execute();
	if (!isOpen) return 0;
	const queued = await queueWave(trx, { surveyId, kind: "reminder", wave, states: "all", queuedBy: null });
	const detail = { queued, wave };
	await logEvent(trx, {
		personId: null,
		action: "survey.reminded",
		subjectKind: "survey",
		subjectId: surveyId,
		detail,
	});
	return queued;
}
