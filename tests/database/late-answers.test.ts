import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import type { AnswerPlace } from "#app/collect/answer-place.server.ts";
import { countLateWaiting, decideLate, type LateChoice, listLateAnswers } from "#app/collect/late-answers.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, askGrower, pounds, submit, typeStep } from "./answering-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let wisconsin: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

/** A survey that closed while its grower was answering, who then sent in. */
async function late({ before }: { before?: number } = {}) {
	const asked = await askGrower(owner, iowa);
	const { place, grower, step } = asked;
	if (before !== undefined) await sendHarvest(grower, place, step, before);
	await asDesk(iowa, (trx) => closeSurvey(trx, iowa, place.surveyId));
	await sendHarvest(grower, place, step, 4000);
	const { response } = await answeringOf(grower, place);
	return { ...asked, responseId: response!.responseId, version: response!.submittedVersion };
}

async function sendHarvest(grower: Grower, place: AnswerPlace, step: string, harvest: number) {
	await typeStep(grower, place, step, pounds(40, harvest, harvest));
	const sent = await submit(grower, place);
	if (typeof sent === "string" || !("receiptCode" in sent)) throw new Error("the answers were not sent in");
}

const decide = (viewer: Associate, choice: Partial<LateChoice> & { surveyId: string; responseId: string }) =>
	asDesk(viewer, (trx) => decideLate(trx, viewer, { version: 1, take: true, reason: "Mail came late.", ...choice }));

async function harvestOf({ surveyId, operationId }: AnswerPlace): Promise<number | undefined> {
	const { rows } = await owner.query(
		`select y from collect.fact where survey_id = $1 and operation_id = $2 and crop_key = 'apple'
			and measure_key = 'base.harvested_lb'`,
		[surveyId, operationId],
	);
	return rows[0]?.y as number | undefined;
}

async function dispositionOf({ surveyId, operationId }: AnswerPlace) {
	const { rows } = await owner.query(
		"select disposition from collect.frame_operation where survey_id = $1 and operation_id = $2",
		[surveyId, operationId],
	);
	return rows[0].disposition as string;
}

const waitingOf = async (viewer: Associate, surveyId: string) =>
	(await asDesk(viewer, (trx) => countLateWaiting(trx, viewer))).find((row) => row.surveyId === surveyId)?.waiting ?? 0;

test("a late answer waits, and counts nowhere until it is taken in; then it counts like any other", async () => {
	const { place, grower, responseId, version } = await late();
	expect([await harvestOf(place), await dispositionOf(place)]).toEqual([undefined, "partial"]);
	expect(await waitingOf(iowa, place.surveyId)).toBe(1);
	expect(await asDesk(iowa, (trx) => listLateAnswers(trx, iowa, place.surveyId))).toMatchObject([
		{ responseId, version, taken: null, countsAlready: false },
	]);

	expect(await decide(iowa, { ...place, responseId, version })).toBe("taken");
	expect([await harvestOf(place), await dispositionOf(place)]).toEqual([4000, "complete"]);
	expect(await waitingOf(iowa, place.surveyId)).toBe(0);
	expect(await asDesk(iowa, (trx) => listLateAnswers(trx, iowa, place.surveyId))).toMatchObject([
		{ taken: true, reason: "Mail came late.", decidedBy: "Iowa's associate" },
	]);
	const { response } = await answeringOf(grower, place);
	expect(response).toMatchObject({ lateAt: null, submittedVersion: 2, changedSinceSubmission: false });
	// The late version stays as it came.
	expect(await count(owner, "collect.submission where late and response_id = $1", [responseId])).toBe(1);
	expect(await count(owner, "log.event where action = 'response.taken_in' and subject_id = $1", [responseId])).toBe(1);
});

test("left out, it stays as a record and counts nowhere; what was sent in in time goes on counting", async () => {
	const { place, responseId, version } = await late({ before: 3500 });
	expect(await harvestOf(place)).toBe(3500);
	expect(await asDesk(iowa, (trx) => listLateAnswers(trx, iowa, place.surveyId))).toMatchObject([
		{ countsAlready: true },
	]);
	expect(await decide(iowa, { ...place, responseId, version, take: false })).toBe("left");
	expect([await harvestOf(place), await dispositionOf(place)]).toEqual([3500, "complete"]);
	expect(await waitingOf(iowa, place.surveyId)).toBe(0);
	expect(await count(owner, "collect.submission where response_id = $1", [responseId])).toBe(2);
});

test("is decided once: pressed twice, the second changes nothing, and a newer one waits anew", async () => {
	const { place, grower, step, responseId, version } = await late();
	expect(await decide(iowa, { ...place, responseId, version, take: false })).toBe("left");
	expect(await decide(iowa, { ...place, responseId, version })).toBe("already_decided");
	expect(await harvestOf(place)).toBeUndefined();

	await sendHarvest(grower, place, step, 4200);
	expect(await waitingOf(iowa, place.surveyId)).toBe(1);
	// What the page was showing is not what would be taken in.
	expect(await decide(iowa, { ...place, responseId, version })).toBe("already_decided");
	expect(await decide(iowa, { ...place, responseId, version: version + 1 })).toBe("taken");
	expect(await harvestOf(place)).toBe(4200);
});

test("nothing is decided once a release is drafted, unless the draft was sent back", async () => {
	const { place, responseId, version } = await late();
	const { rows } = await owner.query(
		"insert into collect.release_draft (survey_id, rules, drafted_by) values ($1, '{}', $2) returning release_draft_id",
		[place.surveyId, iowa.personId],
	);
	expect(await decide(iowa, { ...place, responseId, version })).toBe("already_drafted");
	expect(await waitingOf(iowa, place.surveyId)).toBe(0);
	expect(await harvestOf(place)).toBeUndefined();
	await owner.query("update collect.release_draft set status = 'failed' where release_draft_id = $1", [
		rows[0].release_draft_id,
	]);
	expect(await decide(iowa, { ...place, responseId, version })).toBe("taken");
});

test("another state's late answers are neither listed nor decided on", async () => {
	const { place, responseId, version } = await late();
	expect(await count(owner, "collect.response where late_at is not null and response_id = $1", [responseId])).toBe(1);
	expect(await asDesk(wisconsin, (trx) => listLateAnswers(trx, wisconsin, place.surveyId))).toEqual([]);
	expect(await waitingOf(wisconsin, place.surveyId)).toBe(0);
	expect(await decide(wisconsin, { ...place, responseId, version })).toBe("not_found");
	expect(await harvestOf(place)).toBeUndefined();
});
