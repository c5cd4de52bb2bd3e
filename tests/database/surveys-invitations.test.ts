import { sql } from "kysely";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { countMailings, countToWrite, sendInvitations, sendReminders } from "#app/collect/invitations.server.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { createPersonalLink, findLink } from "#app/collect/personal-link.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
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
let surveyId: string;
let waiting: string;
let answered: string;
let inWisconsin: string;

// The queue belongs to the application's role; the owner of the schema does not see into it.
const jobs = () =>
	scopedTransaction({ kind: "none" }, async (trx) => {
		const { rows } = await sql<{ n: number }>`select count(*)::int as n from graphile_worker._private_jobs`.execute(
			trx,
		);
		return rows[0]!.n;
	});
const mailings = (more = "") => count(owner, `collect.mailing where survey_id = $1 ${more}`, [surveyId]);
const invite = (viewer: Associate) => asDesk(viewer, (trx) => sendInvitations(trx, viewer, surveyId));
const remind = (viewer: Associate, wave: number) => asDesk(viewer, (trx) => sendReminders(trx, viewer, surveyId, wave));

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	both = await addPerson(owner, "Associate of both", ["19", "55"]);
	waiting = await addOperation(owner, { state: "19" });
	answered = await addOperation(owner, { state: "19" });
	await addOperation(owner, { state: "19", email: null });
	await addOperation(owner, { state: "19", email: "" });
	inWisconsin = await addOperation(owner, { state: "55" });
	const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"])));
	surveyId = (made as { surveyId: string }).surveyId;
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

test("nobody is invited to a draft", async () => {
	expect(await invite(both)).toBe("not_open");
	expect(await mailings()).toBe(0);
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	await answerFor(owner, surveyId, answered);
});

test("a rolled-back invitation leaves neither mailing nor job", async () => {
	const before = await jobs();
	const failing = asDesk(iowa, async (trx) => {
		expect(await sendInvitations(trx, iowa, surveyId)).toEqual({ queued: 1 });
		throw new Error("stop here");
	});
	await expect(failing).rejects.toThrow("stop here");
	expect([await mailings(), await jobs()]).toEqual([0, before]);
});

test("pressing three times at once invites each grower of the viewer's states once", async () => {
	expect(await asDesk(iowa, (trx) => countToWrite(trx, iowa, surveyId))).toEqual({ toInvite: 1, withoutAddress: 2 });
	const before = await jobs();
	const outcomes = await Promise.all([invite(iowa), invite(iowa), invite(iowa)]);
	expect(outcomes.reduce((sum, outcome) => sum + (outcome as { queued: number }).queued, 0)).toBe(1);
	const { rows } = await owner.query("select operation_id, kind, wave from collect.mailing where survey_id = $1", [
		surveyId,
	]);
	expect(rows).toEqual([{ operation_id: waiting, kind: "invitation", wave: 1 }]);
	expect(await jobs()).toBe(before + 1);
	expect(await count(owner, "log.event where subject_id = $1 and action = 'survey.invited'", [surveyId])).toBe(1);
});

test("Iowa's associate reaches nobody in Wisconsin, not even with the operation's id", async () => {
	expect(
		await count(owner, "collect.frame_operation where survey_id = $1 and operation_id = $2", [surveyId, inWisconsin]),
	).toBe(1);
	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, inWisconsin, 1))).toBe("not_found");
	const insert = asDesk(iowa, (trx) =>
		trx
			.insertInto("collect.mailing")
			.values({ survey_id: surveyId, operation_id: inWisconsin, kind: "invitation", wave: 1 })
			.execute(),
	);
	await expect(insert).rejects.toMatchObject({ code: "42501" }); // refused by row-level security
	expect(await mailings(`and operation_id = '${inWisconsin}'`)).toBe(0);
});

test("a reminder goes once a wave to those invited who have not answered", async () => {
	expect(await remind(iowa, 1)).toEqual({ queued: 0 }); // the invitation has not gone out yet
	await owner.query("update collect.mailing set sent_at = now() where survey_id = $1", [surveyId]);
	const { reminderWave } = await asDesk(iowa, (trx) => countMailings(trx, iowa, surveyId));
	expect(reminderWave).toBe(1);
	expect(await remind(iowa, 1)).toEqual({ queued: 1 });
	expect(await remind(iowa, 1)).toEqual({ queued: 0 });
	expect(await remind(iowa, 9)).toBe("not_found");
	expect(await mailings("and kind = 'reminder'")).toBe(1);
});

test("a new link ends the old ones at once, and pressing twice sends one mail", async () => {
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) =>
		createPersonalLink(trx, { surveyId, operationId: waiting, expiresAt }),
	);
	const found = () => scopedTransaction({ kind: "network" }, (trx) => findLink(trx, token));
	expect(await found()).toBeDefined();
	const send = () => asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, waiting, 2));
	expect(await send()).toMatchObject({ queued: 1 });
	expect(await found()).toBeUndefined();
	expect(await send()).toMatchObject({ queued: 0 });
	expect(await mailings(`and operation_id = '${waiting}' and kind = 'invitation'`)).toBe(2);
	expect(await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, answered, 1))).toBe("already_answered");
});
