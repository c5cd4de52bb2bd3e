import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import type { Answer } from "#app/collect/form.ts";
import { sendNewLink } from "#app/collect/new-link.server.ts";
import { listOperationSurveys } from "#app/collect/operation-surveys.server.ts";
import { createPersonalLink, findLink } from "#app/collect/personal-link.server.ts";
import { findResponse } from "#app/collect/response-view.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { addOperation, answerFor, asDesk, count, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin, both } = await openSurveysDatabase();

async function openFor(operation: Parameters<typeof addOperation>[1]) {
	const operationId = await addOperation(owner, operation);
	const made = await asDesk(both, (trx) => createSurvey(trx, both, draftOf(["19", "55"])));
	const { surveyId } = made as { surveyId: string };
	await asDesk(both, (trx) => openSurvey(trx, both, surveyId));
	return { surveyId, operationId };
}

async function responseOf(surveyId: string, operationId: string): Promise<string> {
	const { rows } = await owner.query(
		"select response_id from collect.response where survey_id = $1 and operation_id = $2",
		[surveyId, operationId],
	);
	return rows[0].response_id as string;
}

async function plantingOf(operationId: string): Promise<string> {
	const { rows } = await owner.query("select planting_id from directory.planting where operation_id = $1", [
		operationId,
	]);
	return rows[0].planting_id as string;
}

const submit = (responseId: string, version: number, plantingId: string, answers: Answer[]) =>
	owner.query("insert into collect.submission (response_id, version, answers) values ($1, $2, $3)", [
		responseId,
		version,
		JSON.stringify({ plantings: [{ plantingId, cropKey: "apple" }], answers }),
	]);
const given = (questionKey: string, value: Answer["value"], more: Partial<Answer> = {}): Answer => ({
	questionKey,
	plantingId: null,
	kind: "given",
	value,
	given: { text: String(value) },
	...more,
});
const read = (viewer: Associate, surveyId: string, responseId: string, version?: number) =>
	asDesk(viewer, (trx) => findResponse(trx, viewer, { surveyId, responseId }, version));

describe("a response", () => {
	test("shows what was sent in last, in the grower's own unit, and the earlier times on request", async () => {
		const { surveyId, operationId } = await openFor({ state: "19", name: "Quail Bend Orchard" });
		await answerFor(owner, surveyId, operationId, "es");
		const responseId = await responseOf(surveyId, operationId);
		const plantingId = await plantingOf(operationId);
		const { rows } = await owner.query("select bushel_lb from directory.crop where crop_key = 'apple'");
		const bushels = (n: number) => ({ plantingId, given: { text: String(n), unit: "bu" } });
		const lb = (n: number) => n * rows[0].bushel_lb;
		await submit(responseId, 1, plantingId, [
			given("harvested", lb(10), bushels(10)),
			given("normal_crop", lb(10), bushels(10)),
		]);
		await submit(responseId, 2, plantingId, [
			given("harvested", lb(12.5), bushels(12.5)),
			{ ...given("normal_crop", null), plantingId, kind: "dont_know", given: null },
			given("comment", "<b>Hail</b> on May 4"),
		]);
		// A planting taken out since still names its answers; one planted since was not asked about.
		await owner.query("update directory.planting set removed_on = current_date where planting_id = $1", [plantingId]);
		await owner.query(
			"insert into directory.planting (operation_id, crop_key, bearing_trees) values ($1, 'apple', 9)",
			[operationId],
		);

		const newest = await read(iowa, surveyId, responseId);
		expect(newest).toMatchObject({ operationName: "Quail Bend Orchard", language: "es", mode: "web", shownVersion: 2 });
		expect(newest?.submissions.map(({ version }) => version)).toEqual([2, 1]);
		const shown = newest!.groups.flatMap((group) => group.lines.map((line) => [line.questionKey, line.shown]));
		expect(Object.fromEntries(shown)).toMatchObject({
			bearing_trees: { kind: "none" },
			normal_crop: { kind: "dont_know" },
			harvested: { kind: "quantity", value: 12.5, unit: "bu" },
			comment: { kind: "text", text: "<b>Hail</b> on May 4" },
		});
		expect(newest?.groups.filter((group) => group.planting)).toHaveLength(1);

		const first = await read(iowa, surveyId, responseId, 1);
		expect(JSON.stringify(first?.groups)).not.toContain("Hail");
		expect((await read(iowa, surveyId, responseId, 7))?.shownVersion).toBe(2);
	});

	test("that was not sent in tells that it was begun, and none of its answers", async () => {
		const { surveyId, operationId } = await openFor({ state: "19" });
		await owner.query(
			`insert into collect.response (survey_id, operation_id, state_fips, language, pledge_version)
			values ($1, $2, '19', 'en', '1')`,
			[surveyId, operationId],
		);
		const responseId = await responseOf(surveyId, operationId);
		await owner.query(
			`insert into collect.answer (response_id, question_key, kind, value) values ($1, 'comment', 'given', '"Do not tell"')`,
			[responseId],
		);
		const draft = await read(iowa, surveyId, responseId);
		expect(draft).toMatchObject({ submissions: [], shownVersion: null, groups: [], receiptCode: null });
		expect(await count(owner, "collect.answer where response_id = $1", [responseId])).toBe(1);
	});

	test("of another state or another survey is not found, though it is there", async () => {
		const { surveyId, operationId } = await openFor({ state: "55" });
		const other = await openFor({ state: "19" });
		await answerFor(owner, surveyId, operationId);
		const responseId = await responseOf(surveyId, operationId);
		expect(await read(wisconsin, surveyId, responseId)).toBeDefined();
		expect(await read(iowa, surveyId, responseId)).toBeUndefined();
		expect(await read(wisconsin, other.surveyId, responseId)).toBeUndefined();
		expect(await read(wisconsin, surveyId, "' or true")).toBeUndefined();
		// The second wall: without any check in code the row stays out of Iowa's sight.
		const seen = await asDesk(iowa, (trx) =>
			trx.selectFrom("collect.response").select("response_id").where("response_id", "=", responseId).execute(),
		);
		expect(seen).toEqual([]);
		expect(await count(owner, "collect.response where response_id = $1", [responseId])).toBe(1);
	});
});

describe("a grower's page", () => {
	test("lists the surveys that asked, and is not found from another state", async () => {
		const { surveyId, operationId } = await openFor({ state: "19", name: "Otter Slough Fruit" });
		await answerFor(owner, surveyId, operationId);
		const page = (viewer: Associate) =>
			asDesk(viewer, async (trx) => ({
				operation: await findOperation(trx, viewer, operationId),
				surveys: await listOperationSurveys(trx, viewer, operationId),
			}));
		expect(await page(iowa)).toMatchObject({
			operation: { name: "Otter Slough Fruit", timeZone: "America/Chicago", plantings: [{ cropKey: "apple" }] },
			surveys: [{ surveyId, disposition: "complete", isOpen: true, linkWave: 1 }],
		});
		expect(await page(wisconsin)).toEqual({ operation: undefined, surveys: [] });
		expect(await count(owner, "directory.operation where operation_id = $1", [operationId])).toBe(1);
	});

	test("sends a new link that ends the old ones, once for a button pressed twice", async () => {
		const { surveyId, operationId } = await openFor({ state: "19" });
		const token = await scopedTransaction({ kind: "network" }, (trx) =>
			createPersonalLink(trx, { surveyId, operationId, expiresAt: new Date(Date.now() + 86_400_000) }),
		);
		const survey = async () =>
			(await asDesk(iowa, (trx) => listOperationSurveys(trx, iowa, operationId))).find(
				(one) => one.surveyId === surveyId,
			)!;
		const open = () => scopedTransaction({ kind: "network" }, (trx) => findLink(trx, token));
		expect(await open()).toBeDefined();
		const { linkWave } = await survey();
		const press = () => asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, linkWave));
		const outcomes = await Promise.all([press(), press()]);
		expect(outcomes.map((outcome) => (outcome as { queued: number }).queued).toSorted()).toEqual([0, 1]);
		expect(await open()).toBeUndefined();
		const after = await survey();
		expect(after.mails.map(({ kind, sentAt, failure }) => [kind, sentAt, failure])).toEqual([
			["invitation", null, null],
		]);
		expect(after.linkWave).toBe(linkWave + 1);
		await asDesk(iowa, (trx) => sendNewLink(trx, iowa, surveyId, operationId, after.linkWave));
		expect((await survey()).mails.map(({ kind }) => kind)).toEqual(["invitation", "new_link"]);
	});
});
