import { sql } from "kysely";
import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { sendInvitations, sendReminders } from "#app/collect/invitations.server.ts";
import { countMailsByKind } from "#app/collect/mail-counts.server.ts";
import { ReminderForm } from "#app/collect/reminder.schema.ts";
import { listReminders, sendDueReminder, setReminders } from "#app/collect/reminders.server.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { queueThanks } from "#app/collect/thanks.server.ts";
import { dropJob } from "#app/jobs/queue.server.ts";
import { setReminderAlarms } from "#app/jobs/send-reminders.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addOperation,
	addPerson,
	answerFor,
	asDesk,
	connectOwner,
	count,
	draftOf,
	loadPlaces,
	useDatabase,
} from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let both: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	both = await addPerson(owner, "Associate of both", ["19", "55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const zone = "America/Chicago";
const days = 86_400_000;
const inDays = (later: number) => new Date(Date.now() + later * days);
const form = (first: Date | null, second: Date | null) => {
	const [one, two] = [first && wallClockOf(first, zone), second && wallClockOf(second, zone)];
	return ReminderForm.parse({ firstOn: one?.on, firstAt: one?.at, secondOn: two?.on, secondAt: two?.at });
};
const set = (viewer: Associate, surveyId: string, times: ReminderForm) =>
	asDesk(viewer, (trx) => setReminders(trx, viewer, surveyId, times));
const list = (surveyId: string) => asDesk(both, (trx) => listReminders(trx, both, surveyId));
const ring = (surveyId: string, wave: number, now = new Date()) =>
	scopedTransaction({ kind: "network" }, (trx) => sendDueReminder(trx, surveyId, wave, now));
/** When the queue rings for a wave; null when it does not. */
const alarm = async (surveyId: string, wave: number) =>
	scopedTransaction({ kind: "none" }, async (trx) => {
		const { rows } = await sql<{ run_at: Date }>`select run_at from graphile_worker._private_jobs
			where key = ${`send_reminders:${surveyId}:${wave}`}`.execute(trx);
		expect(rows.length).toBeLessThan(2);
		return rows[0]?.run_at ?? null;
	});

/** An open survey of two states in which growers of both were invited; none of an earlier test is in it. */
async function invitedSurvey() {
	await owner.query("update directory.operation set status = 'left'");
	const asked = [await addOperation(owner, { state: "19" }), await addOperation(owner, { state: "19" })];
	const wisconsin = await addOperation(owner, { state: "55" });
	const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"])));
	const { surveyId } = made as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	await asDesk(both, (trx) => sendInvitations(trx, both, surveyId));
	await owner.query("update collect.mailing set sent_at = now() where survey_id = $1", [surveyId]);
	return { surveyId, first: asked[0]!, second: asked[1]!, wisconsin };
}
const reminded = async (surveyId: string, wave: number) => {
	const { rows } = await owner.query(
		"select operation_id from collect.mailing where survey_id = $1 and kind = 'reminder' and wave = $2",
		[surveyId, wave],
	);
	return rows.map((row) => row.operation_id as string).toSorted();
};

test("opening a survey sets two reminders in its time, and the queue rings at each", async () => {
	const { surveyId } = await invitedSurvey();
	const reminders = await list(surveyId);
	expect(reminders.map(({ wave }) => wave)).toEqual([1, 2]);
	for (const { wave, remindAt } of reminders) {
		expect(wallClockOf(remindAt, zone).at).toBe("09:00");
		expect(Math.abs(remindAt.getTime() - inDays(wave * 10).getTime())).toBeLessThan(2 * days);
		expect(await alarm(surveyId, wave)).toEqual(remindAt);
	}
});

test("a worker that starts sets the alarms that are missing, each once, and none for what is over", async () => {
	const { surveyId } = await invitedSurvey();
	const first = inDays(3);
	await set(both, surveyId, form(first, null));
	await scopedTransaction({ kind: "none" }, (trx) => dropJob(trx, `send_reminders:${surveyId}:1`));
	expect(await alarm(surveyId, 1)).toBeNull();
	await setReminderAlarms();
	await setReminderAlarms();
	expect(await alarm(surveyId, 1)).toEqual((await list(surveyId))[0]!.remindAt);
	expect(await alarm(surveyId, 2)).toBeNull();
});

test("a reminder that rings goes once, in all states, to those who still owe an answer", async () => {
	const { surveyId, first, second, wisconsin } = await invitedSurvey();
	await answerFor(owner, surveyId, first);
	expect(await ring(surveyId, 1)).toBe(0); // too early: the clock is set anew
	expect(await reminded(surveyId, 1)).toEqual([]);
	expect(await alarm(surveyId, 1)).toEqual((await list(surveyId))[0]!.remindAt);

	const together = await Promise.all([ring(surveyId, 1, inDays(12)), ring(surveyId, 1, inDays(12))]);
	expect(together.toSorted()).toEqual([0, 2]);
	expect(await ring(surveyId, 1, inDays(13))).toBe(0);
	expect(await reminded(surveyId, 1)).toEqual([second, wisconsin].toSorted());
	expect((await list(surveyId))[0]!.sentAt).toBeInstanceOf(Date);
});

test.each([
	["refused", "update collect.frame_operation set disposition = 'refused' where operation_id = $1"],
	["is undeliverable", "update directory.operation set mail_returned_at = now() where operation_id = $1"],
	["stopped mail", "update directory.operation set mail_wanted = false where operation_id = $1"],
	["left", "update directory.operation set status = 'left' where operation_id = $1"],
	["was never invited", "delete from collect.mailing where operation_id = $1"],
	["whose invitation is still on its way", "update collect.mailing set sent_at = null where operation_id = $1"],
])("a grower who %s is not reminded", async (_why, statement) => {
	const { surveyId, first, second, wisconsin } = await invitedSurvey();
	await owner.query(statement, [first]);
	await ring(surveyId, 1, inDays(12));
	expect(await reminded(surveyId, 1)).toEqual([second, wisconsin].toSorted());
});

test("a reminder sent by hand stands for the set one: the clock reminds the others alone", async () => {
	const { surveyId, wisconsin } = await invitedSurvey();
	expect(await asDesk(iowa, (trx) => sendReminders(trx, iowa, surveyId, 1))).toEqual({ queued: 2 });
	expect(await ring(surveyId, 1, inDays(12))).toBe(1);
	expect(await reminded(surveyId, 1)).toHaveLength(3);
	expect(await reminded(surveyId, 1)).toContain(wisconsin);
});

test("times are moved with their alarms, and emptied ones called off and set again", async () => {
	const { surveyId } = await invitedSurvey();
	const [first, second] = [inDays(3), inDays(6)].map((at) => new Date(Math.floor(at.getTime() / 60_000) * 60_000));
	expect(await set(both, surveyId, form(first!, second!))).toBe("set");
	expect([await alarm(surveyId, 1), await alarm(surveyId, 2)]).toEqual([first, second]);

	expect(await set(both, surveyId, form(first!, null))).toBe("set");
	expect(await alarm(surveyId, 2)).toBeNull();
	expect(await ring(surveyId, 2, inDays(7))).toBe(0);
	expect((await list(surveyId))[1]).toMatchObject({ sentAt: null, cancelledAt: expect.any(Date) });

	expect(await set(both, surveyId, form(first!, second!))).toBe("set");
	expect(await alarm(surveyId, 2)).toEqual(second);
	expect(await ring(surveyId, 2, inDays(7))).toBe(3);
});

test.each([
	["in the past", -1, 5, "firstOn", "closing_past"],
	["after the closing", 3, 40, "secondOn", "reminder_late"],
	["in the wrong order", 8, 4, "secondOn", "reminder_order"],
])("a time %s is told beside its field and changes nothing", async (_what, first, second, field, code) => {
	const { surveyId } = await invitedSurvey();
	const before = await list(surveyId);
	expect(await set(both, surveyId, form(inDays(first), inDays(second)))).toEqual({ problems: [{ field, code }] });
	expect(await list(surveyId)).toEqual(before);
});

test("a first reminder is not moved behind the second that stands", async () => {
	const { surveyId } = await invitedSurvey();
	const second = (await list(surveyId))[1]!.remindAt;
	expect(await set(both, surveyId, form(inDays(25), second))).toEqual({
		problems: [{ field: "secondOn", code: "reminder_order" }],
	});
});

test("a day without a time, and words for a day, are told beside their field", async () => {
	const { surveyId } = await invitedSurvey();
	const { firstOn } = form(inDays(3), null);
	expect(await set(both, surveyId, ReminderForm.parse({ firstOn }))).toEqual({
		problems: [{ field: "firstAt", code: "empty" }],
	});
	expect(ReminderForm.safeParse({ firstOn: "soon" }).error?.issues[0]?.message).toBe("date_wrong");
});

test("one that went stays as it is, and a time that has come does not fault the other", async () => {
	const { surveyId } = await invitedSurvey();
	await ring(surveyId, 1, inDays(12));
	const sent = (await list(surveyId))[0]!;
	expect(await set(both, surveyId, form(inDays(1), inDays(20)))).toBe("set");
	expect((await list(surveyId))[0]).toEqual(sent);
	await owner.query(
		"update collect.reminder set remind_at = date_trunc('minute', now()) where survey_id = $1 and wave = 2",
		[surveyId],
	);
	const { remindAt } = (await list(surveyId))[1]!;
	expect(await set(both, surveyId, form(null, remindAt))).toBe("set");
});

test("the associate of one of two states sees the times and may not move them", async () => {
	const { surveyId } = await invitedSurvey();
	expect(await asDesk(iowa, (trx) => listReminders(trx, iowa, surveyId))).toHaveLength(2);
	expect(await set(iowa, surveyId, form(inDays(1), inDays(2)))).toBe("states_not_held");
	const elsewhere = await addPerson(owner, "Minnesota's associate", ["27"]);
	expect(await asDesk(elsewhere, (trx) => listReminders(trx, elsewhere, surveyId))).toEqual([]);
	expect(await set(elsewhere, surveyId, form(inDays(1), inDays(2)))).toBe("not_found");
});

test("a survey that closed before its reminder sends none", async () => {
	const { surveyId } = await invitedSurvey();
	await owner.query("update collect.survey set closed_at = now() where survey_id = $1", [surveyId]);
	expect(await ring(surveyId, 1, inDays(12))).toBe(0);
	expect(await count(owner, "collect.mailing where survey_id = $1 and kind = 'reminder'", [surveyId])).toBe(0);
	expect((await list(surveyId))[0]).toMatchObject({ sentAt: null, cancelledAt: expect.any(Date) });
});

test("a published release thanks once those who answered, and nobody before it is published", async () => {
	const { surveyId, first, second } = await invitedSurvey();
	for (const operationId of [first, second]) await answerFor(owner, surveyId, operationId);
	await owner.query("update directory.operation set mail_wanted = false where operation_id = $1", [second]);
	const drafted = await owner.query(
		"insert into collect.release_draft (survey_id, rules, drafted_by) values ($1, '{}', $2) returning release_draft_id as id",
		[surveyId, both.personId],
	);
	const thank = () => scopedTransaction({ kind: "network" }, (trx) => queueThanks(trx, drafted.rows[0].id));
	expect(await thank()).toBe(0);
	await owner.query(
		`update collect.release_draft set status = 'approved', audit = '{"passed": true}' where survey_id = $1`,
		[surveyId],
	);
	expect(await thank()).toBe(1);
	expect(await thank()).toBe(0);
	const { rows } = await owner.query(
		"select operation_id from collect.mailing where kind = 'thank_you' and survey_id = $1",
		[surveyId],
	);
	expect(rows).toEqual([{ operation_id: first }]);
});

test("the desk counts what was sent, waits and failed, in its own states alone", async () => {
	const { surveyId, first, wisconsin } = await invitedSurvey();
	await owner.query(
		"update collect.mailing set sent_at = null, failed_at = now(), failure = 'returned' where operation_id = $1",
		[first],
	);
	await ring(surveyId, 1, inDays(12));
	const counts = (viewer: Associate) => asDesk(viewer, (trx) => countMailsByKind(trx, viewer, surveyId));
	const all = await counts(both);
	expect(all[0]).toMatchObject({
		kind: "invitation",
		sent: 2,
		waiting: 0,
		failed: 1,
		failures: [{ why: "returned", count: 1 }],
	});
	expect(all[1]).toMatchObject({ kind: "reminder", wave: 1, sent: 0, waiting: 2, failed: 0, lastSentAt: null });
	expect((await counts(iowa))[0]).toMatchObject({ sent: 1, failed: 1 });
	expect(await count(owner, "collect.mailing where operation_id = $1", [wisconsin])).toBe(2);
});
