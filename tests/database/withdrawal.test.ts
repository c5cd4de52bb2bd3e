import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { findOwnAnswers } from "#app/collect/own-answers.server.ts";
import { findResponse } from "#app/collect/response-view.server.ts";
import type { AnswerPlace } from "#app/collect/responses.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { listReleased, withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { writeFacts } from "#app/tally/facts.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { asGrower, askGrower, growerOf, pounds, submit, typeStep } from "./answering-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let associate: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	associate = await addPerson(owner, "Iowa's associate", ["19"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** A grower who has sent answers in. */
async function answered() {
	const asked = await askGrower(owner, associate);
	await typeStep(asked.grower, asked.place, asked.step, pounds(40, 4000, 4000));
	expect(await submit(asked.grower, asked.place)).toMatchObject({ outcome: "submitted" });
	return asked;
}

const withdraw = (operationId: string, place: AnswerPlace) =>
	asGrower(growerOf(operationId), (trx) => withdrawAnswer(trx, growerOf(operationId), place));
const ownAnswers = (operationId: string, place: AnswerPlace, version?: number) =>
	asGrower(growerOf(operationId), (trx) => findOwnAnswers(trx, growerOf(operationId), place, version));

/** What stands of a response, as it really is. */
async function standing({ surveyId, operationId }: AnswerPlace) {
	const { rows } = await owner.query(
		`select r.response_id, r.receipt_code, r.submitted_at, r.withdrawn_at is not null as withdrawn, f.disposition,
			(select count(*)::int from collect.fact x where x.survey_id = r.survey_id) as facts,
			(select count(*)::int from collect.submission s where s.response_id = r.response_id) as submissions,
			(select count(*)::int from collect.submission s where s.response_id = r.response_id and s.withdrawn_at is null) as counted
		from collect.response r join collect.frame_operation f using (survey_id, operation_id)
		where r.survey_id = $1 and r.operation_id = $2`,
		[surveyId, operationId],
	);
	return rows[0];
}

async function addDraft(surveyId: string, status: string): Promise<string> {
	const { rows } = await owner.query(
		`insert into collect.release_draft (survey_id, status, rules, audit, drafted_by)
		values ($1, $2, '{}', '{"passed": true}', $3) returning release_draft_id`,
		[surveyId, status, associate.personId],
	);
	return rows[0].release_draft_id;
}
async function statusOf(draftId: string): Promise<string> {
	const { rows } = await owner.query("select status from collect.release_draft where release_draft_id = $1", [draftId]);
	return rows[0].status;
}
const logged = (responseId: string) =>
	count(owner, "log.event where action = 'response.withdrawn' and subject_id = $1", [responseId]);

test("a withdrawn answer counts nowhere, and what was sent in stays as a record", async () => {
	const { place } = await answered();
	const before = await standing(place);
	expect(before).toMatchObject({ disposition: "complete", withdrawn: false, submissions: 1, counted: 1 });
	expect(before.facts).toBeGreaterThan(0);
	expect(await withdraw(place.operationId, place)).toBe("withdrawn");
	expect(await standing(place)).toEqual({
		response_id: before.response_id,
		receipt_code: null,
		submitted_at: null,
		withdrawn: true,
		disposition: "refused",
		facts: 0,
		submissions: 1,
		counted: 0,
	});
	expect(await logged(before.response_id)).toBe(1);
});

test("withdrawing a second time changes nothing", async () => {
	const { place } = await answered();
	await withdraw(place.operationId, place);
	const before = await standing(place);
	expect(await withdraw(place.operationId, place)).toBe("already_withdrawn");
	expect(await standing(place)).toEqual(before);
	expect(await logged(before.response_id)).toBe(1);
});

test("an answer that was never sent in cannot be withdrawn", async () => {
	const { place } = await askGrower(owner, associate);
	expect(await withdraw(place.operationId, place)).toBe("not_sent");
	expect(await ownAnswers(place.operationId, place)).toBeUndefined();
});

test("facts of a withdrawn answer do not come back when they are written anew", async () => {
	const { place, grower } = await answered();
	await withdraw(place.operationId, place);
	const { response_id: responseId } = await standing(place);
	await asGrower(grower, (trx) => writeFacts(trx, responseId));
	expect((await standing(place)).facts).toBe(0);
});

test("the same answers sent in again count again, under a receipt of their own", async () => {
	const { place, grower } = await answered();
	const first = await standing(place);
	await withdraw(place.operationId, place);
	const again = await submit(grower, place);
	expect(again).toMatchObject({ outcome: "submitted", version: 2 });
	expect(await standing(place)).toMatchObject({
		disposition: "complete",
		withdrawn: false,
		facts: first.facts,
		submissions: 2,
		counted: 1,
	});
	expect((await standing(place)).receipt_code).not.toBe(first.receipt_code);
	const own = await ownAnswers(place.operationId, place);
	expect(own?.submissions.map(({ version, withdrawnAt }) => [version, withdrawnAt !== null])).toEqual([
		[2, false],
		[1, true],
	]);
});

test("a release that waits is to be drafted anew, and one that is published keeps the answer in", async () => {
	const { place } = await answered();
	const waiting = await addDraft(place.surveyId, "audited");
	expect(await withdraw(place.operationId, place)).toBe("withdrawn");
	expect(await statusOf(waiting)).toBe("superseded");

	const other = await answered();
	const published = await addDraft(other.place.surveyId, "approved");
	const before = await standing(other.place);
	expect(await ownAnswers(other.place.operationId, other.place)).toMatchObject({ withdrawal: "released" });
	expect(await withdraw(other.place.operationId, other.place)).toBe("released");
	expect(await standing(other.place)).toEqual(before);
	expect(await statusOf(published)).toBe("approved");
});

test("what came after the closing can be withdrawn whatever is released, and ends no draft", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	await typeStep(grower, place, step, pounds(40, 4000, 4000));
	await asDesk(associate, (trx) => closeSurvey(trx, associate, place.surveyId));
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	const waiting = await addDraft(place.surveyId, "audited");
	await addDraft(place.surveyId, "approved");
	expect(await ownAnswers(place.operationId, place)).toMatchObject({ withdrawal: "possible" });
	expect(await withdraw(place.operationId, place)).toBe("withdrawn");
	expect(await statusOf(waiting)).toBe("audited");
	expect(await standing(place)).toMatchObject({ withdrawn: true, receipt_code: null, counted: 0 });
});

test("asking what is released leaves a grower as unable to see a draft as before", async () => {
	const { place, grower } = await answered();
	await addDraft(place.surveyId, "approved");
	await asGrower(grower, async (trx) => {
		expect([...(await listReleased(trx, [place.surveyId]))]).toEqual([place.surveyId]);
		expect(await trx.selectFrom("collect.release_draft").select("status").execute()).toEqual([]);
		expect(await trx.selectFrom("directory.operation").select("operation_id").execute()).toHaveLength(1);
	});
	expect(await count(owner, "collect.release_draft where survey_id = $1", [place.surveyId])).toBe(1);
});

test("another grower's answer is neither seen nor withdrawn, though it is there", async () => {
	const mine = await answered();
	const theirs = await answered();
	const before = await standing(theirs.place);
	expect(before.submitted_at).not.toBeNull();
	expect(await ownAnswers(mine.place.operationId, theirs.place)).toBeUndefined();
	expect(await withdraw(mine.place.operationId, theirs.place)).toBe("not_found");
	expect(await withdraw(mine.place.operationId, { surveyId: "x", operationId: mine.place.operationId })).toBe(
		"not_found",
	);
	expect(await standing(theirs.place)).toEqual(before);
});

test("a withdrawn answer is read by its grower and no longer by the desk, which cannot withdraw one itself", async () => {
	const { place } = await answered();
	const { response_id: responseId } = await standing(place);
	const atDesk = () =>
		asDesk(associate, (trx) => findResponse(trx, associate, { surveyId: place.surveyId, responseId }));
	expect(await atDesk()).toMatchObject({ shownVersion: 1, withdrawnAt: null });

	const marked = await asDesk(associate, (trx) =>
		trx
			.updateTable("collect.submission")
			.set({ withdrawn_at: new Date() })
			.where("response_id", "=", responseId)
			.executeTakeFirst(),
	);
	expect(Number(marked.numUpdatedRows)).toBe(0);
	expect(await standing(place)).toMatchObject({ counted: 1 });

	await withdraw(place.operationId, place);
	expect(await atDesk()).toMatchObject({ shownVersion: null, groups: [], withdrawnAt: expect.any(Date) });
	const own = await ownAnswers(place.operationId, place);
	expect(own).toMatchObject({ shownVersion: 1, withdrawal: null, receiptCode: null });
	expect(JSON.stringify(own?.groups)).toContain("4000");
});
