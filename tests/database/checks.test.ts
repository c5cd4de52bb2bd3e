import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { FindingsQuery } from "#app/review/findings.schema.ts";
import { countOpenFindings, listFindings } from "#app/review/findings.server.ts";
import { viewFinding } from "#app/routes/desk/parts/checks/finding-view.server.ts";
import { merge, undoMerge } from "#app/routes/desk/parts/merging/merge-steps.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addOrchards,
	aSeasonEarlier,
	answer,
	answerAll,
	check,
	findingsOf,
	oddSurvey,
	orchards,
} from "./checks-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const kindsOf = async (surveyId: string, operationId: string) =>
	(await findingsOf(owner, surveyId, operationId)).map(({ check_kind, question_key, outcome }) => [
		check_kind,
		question_key,
		outcome,
	]);

describe("findings", () => {
	test("bushels told as pounds are a slip of unit, and alike neighbours are not odd", async () => {
		const before = aSeasonEarlier(orchards({ trees: 40, normal: 4100, picked: 3300 }));
		const now = orchards({ trees: 40, normal: 4100, picked: 3300 / 42 });
		const operations = await addOrchards(owner, now);
		await answerAll(iowa, operations, before, 2030);
		const surveyId = await answerAll(iowa, operations, now, 2031);
		await check(surveyId);
		expect(await kindsOf(surveyId, operations[9]!.operationId)).toEqual([["unit_slip", "harvested", null]]);
		for (const { operationId } of operations.slice(0, 9)) expect(await kindsOf(surveyId, operationId)).toEqual([]);
		const [slip] = await findingsOf(owner, surveyId, operations[9]!.operationId);
		// A tenth of the state's normal crop that seems lost: the figure would move by about a third without it.
		expect(slip).toMatchObject({ told: { why: "unit", size: 42, against: "last" }, version: 0 });
		expect(slip!.effect).toBeGreaterThan(0.1);
	});

	test("a harvest that grew as no other did, and is unlike all others, is found twice, each way once", async () => {
		const before = aSeasonEarlier(orchards({ trees: 40, normal: 4100, picked: 3300 }));
		const now = orchards({ trees: 40, normal: 40_000, picked: 30_000 });
		const operations = await addOrchards(owner, now);
		await answerAll(iowa, operations, before, 2030);
		const surveyId = await answerAll(iowa, operations, now, 2031);
		await check(surveyId);
		await check(surveyId);
		const kinds = await kindsOf(surveyId, operations[9]!.operationId);
		expect(kinds.toSorted()).toEqual([
			["like_operations", "harvested", null],
			["like_operations", "normal_crop", null],
			["ratio_to_last", "harvested", null],
			["ratio_to_last", "normal_crop", null],
		]);
	});

	test("an amended answer ends what was odd about the old one, and is judged anew", async () => {
		const now = orchards({ trees: 40, normal: 40_000, picked: 30_000 });
		const operations = await addOrchards(owner, now);
		const surveyId = await answerAll(iowa, operations, now, 2031);
		await check(surveyId);
		const { operationId, plantingId } = operations[9]!;
		expect((await kindsOf(surveyId, operationId)).map(([, , outcome]) => outcome)).toEqual([null, null]);
		await answer({ surveyId, operationId }, plantingId, { trees: 40, normal: 4100, picked: 3300 });
		await check(surveyId);
		expect((await kindsOf(surveyId, operationId)).map(([, , outcome]) => outcome)).toEqual([
			"answer_changed",
			"answer_changed",
		]);
		// The odd ones again: the same findings come back, and no others are made.
		await answer({ surveyId, operationId }, plantingId, now[9]!);
		await check(surveyId);
		expect((await kindsOf(surveyId, operationId)).map(([, , outcome]) => outcome)).toEqual([null, null]);
	});

	test("of a grower that goes into another one stay as they are, with their planting, and so when it is undone", async () => {
		const { surveyId, operationId, plantingId, findings } = await oddSurvey(owner, iowa);
		const [findingId] = findings.map((one) => one.edit_finding_id);
		await asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId));
		const seen = () =>
			asDesk(iowa, async (trx) => ({
				queue: await listFindings(trx, iowa, surveyId, FindingsQuery.parse({})),
				open: (await countOpenFindings(trx, iowa)).get(surveyId),
				one: await viewFinding(trx, iowa, { surveyId, findingId: findingId! }),
				kept: await findingsOf(owner, surveyId, operationId),
			}));
		const before = await seen();
		expect(before).toMatchObject({ open: 2, queue: { total: 2 }, one: { answers: [{ planting: expect.anything() }] } });

		const ids = { keptId: await addOperation(owner, { state: "19" }), droppedId: operationId };
		const merged = await asDesk(iowa, (trx) => merge(trx, iowa, ids, { take: [], plantingIds: [plantingId] }));
		expect(merged).toBe("merged");
		await check(surveyId);
		expect(await seen()).toEqual(before);
		const { rows } = await owner.query("select merge_id from directory.merge where dropped_id = $1", [operationId]);
		expect(await asDesk(iowa, (trx) => undoMerge(trx, iowa, rows[0].merge_id))).toBe("undone");
		await check(surveyId);
		expect(await seen()).toEqual(before);
	});
});
