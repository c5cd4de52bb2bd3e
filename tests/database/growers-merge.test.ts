import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { OperationQuery } from "#app/directory/operation.schema.ts";
import { listOperations } from "#app/directory/operation-list.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import { listLikelyPairs, listMerges, setApart } from "#app/directory/merging/duplicates.server.ts";
import type { MergeChoice } from "#app/directory/merging/merge.server.ts";
import { merge, undoMerge } from "#app/routes/desk/parts/merging/merge-steps.server.ts";
import { leave } from "#app/routes/grower/parts/leaving.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { asGrower, growerOf } from "./answering-fixture.ts";
import {
	addOperation,
	addPerson,
	answerFor,
	asDesk,
	connectOwner,
	count,
	draftOf,
	loadPlaces,
	type NewOperation,
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

let made = 0;
/** Two that may be one, on crops of their own, so that no other test's survey asks them. */
async function twins(one: Partial<NewOperation> = {}, other: Partial<NewOperation> = {}) {
	const crop = `twin_${"abcdefghijklmnopqrstuvwxyz"[made++]}`;
	await owner.query("insert into directory.crop values ($1, $2, 'tree', null)", [crop, 200 + made]);
	const keptId = await addOperation(owner, { state: "19", name: `Kept ${crop}`, crop, ...one });
	const droppedId = await addOperation(owner, { state: "19", name: `Dropped ${crop}`, crop, ...other });
	return { keptId, droppedId, crop };
}

const plantingsOf = async (operationId: string) => {
	const { rows } = await owner.query("select planting_id from directory.planting where operation_id = $1", [
		operationId,
	]);
	return rows.map((row) => row.planting_id as string);
};
const join = (ids: { keptId: string; droppedId: string }, choice: Partial<MergeChoice> = {}, viewer = iowa) =>
	asDesk(viewer, (trx) => merge(trx, viewer, ids, { take: [], plantingIds: [], ...choice }));
async function undo(droppedId: string, viewer = iowa) {
	const { rows } = await owner.query("select merge_id from directory.merge where dropped_id = $1", [droppedId]);
	return asDesk(viewer, (trx) => undoMerge(trx, viewer, rows[0].merge_id));
}
async function open(crop: string) {
	const draft = draftOf(["19"], { crops: [crop] });
	const { surveyId } = (await asDesk(iowa, (trx) => createSurvey(trx, iowa, draft))) as { surveyId: string };
	await asDesk(iowa, (trx) => openSurvey(trx, iowa, surveyId));
	return surveyId;
}
/** Everything that a merge can touch, but when it was touched. */
async function standing(...ids: string[]) {
	const queries = [
		"select to_jsonb(t) - 'updated_at' as row from directory.operation t where operation_id = any ($1) order by operation_id",
		"select to_jsonb(t) as row from directory.planting t where operation_id = any ($1) order by planting_id",
		"select to_jsonb(t) - 'disposition_at' as row from collect.frame_operation t where operation_id = any ($1) order by 1",
		"select to_jsonb(t) as row from auth.role_grant t where operation_id = any ($1) order by role_grant_id",
	];
	return Promise.all(queries.map(async (query) => (await owner.query(query, [ids])).rows));
}

describe("merging two growers", () => {
	test("leaves one with what was chosen of the other, and the list shows that one alone", async () => {
		const { keptId, droppedId, crop } = await twins(
			{ email: null, contact: "Ada" },
			{ email: "bo@wren.example", contact: "Bo" },
		);
		const moved = await plantingsOf(droppedId);
		expect(await join({ keptId, droppedId }, { take: ["email"], plantingIds: moved })).toBe("merged");
		const kept = (await asDesk(iowa, (trx) => findOperation(trx, iowa, keptId)))!;
		expect(kept).toMatchObject({ email: "bo@wren.example", contactName: "Ada", merged: [{ operationId: droppedId }] });
		expect(kept.plantings).toHaveLength(2);
		const dropped = (await asDesk(iowa, (trx) => findOperation(trx, iowa, droppedId)))!;
		expect(dropped).toMatchObject({ status: "merged", mergedInto: keptId, plantings: [] });
		const { rows } = await asDesk(iowa, (trx) => listOperations(trx, iowa, OperationQuery.parse({ q: crop })));
		expect(rows.map(({ operationId }) => operationId)).toEqual([keptId]);
		expect(await count(owner, "log.event where action = 'operation.merged' and subject_id = $1", [keptId])).toBe(1);
	});

	test("takes the duplicate out of an open survey, and whoever signs in for it along", async () => {
		const { keptId, droppedId, crop } = await twins();
		const surveyId = await open(crop);
		const { personId } = await addPerson(owner, "Grower", []);
		await owner.query("insert into auth.role_grant (person_id, role, operation_id) values ($1, 'grower', $2)", [
			personId,
			droppedId,
		]);
		expect(await join({ keptId, droppedId })).toBe("merged");
		const frame = "collect.frame_operation where survey_id = $1 and operation_id = $2 and disposition = $3";
		expect(await count(owner, frame, [surveyId, droppedId, "not_eligible"])).toBe(1);
		expect(await count(owner, frame, [surveyId, keptId, "not_reached"])).toBe(1);
		expect(await count(owner, "auth.role_grant where person_id = $1 and operation_id = $2", [personId, keptId])).toBe(
			1,
		);
	});

	test("is refused where an open survey would lose an answer or a grower", async () => {
		const answering = await twins();
		const surveyId = await open(answering.crop);
		await answerFor(owner, surveyId, answering.droppedId);
		expect(await join(answering)).toBe("answers_open");
		expect(await join({ keptId: answering.droppedId, droppedId: answering.keptId })).toBe("merged");

		const alone = await twins();
		await open(alone.crop);
		const later = await addOperation(owner, { state: "19", crop: alone.crop });
		expect(await join({ keptId: later, droppedId: alone.droppedId })).toBe("asked_alone");
	});

	test("is refused with itself, with one that is gone, and with one of another state, which is there", async () => {
		const { keptId, droppedId } = await twins({}, { state: "55" });
		expect(await join({ keptId, droppedId })).toBe("not_found");
		expect(await join({ keptId, droppedId: keptId })).toBe("not_found");
		expect(await count(owner, "directory.operation where operation_id = $1", [droppedId])).toBe(1);
		expect(await join({ keptId, droppedId }, {}, both)).toBe("merged");
		expect(await join({ keptId, droppedId }, {}, both)).toBe("not_active");
		expect(await undo(droppedId)).toBe("not_found");
		expect(await asDesk(iowa, (trx) => listMerges(trx, iowa))).not.toContainEqual(
			expect.objectContaining({ operationId: keptId }),
		);
	});
});

describe("undoing a merge", () => {
	test("puts both back exactly, in the list, in an open survey and for who signs in", async () => {
		const { keptId, droppedId, crop } = await twins(
			{ email: "a@twin.example" },
			{ email: "b@twin.example", language: "es" },
		);
		await open(crop);
		const { personId } = await addPerson(owner, "Grower", []);
		await owner.query("insert into auth.role_grant (person_id, role, operation_id) values ($1, 'grower', $2)", [
			personId,
			droppedId,
		]);
		const before = await standing(keptId, droppedId);
		const choice = { take: ["name", "email", "language"] as const, plantingIds: await plantingsOf(droppedId) };
		await join({ keptId, droppedId }, { ...choice, take: [...choice.take] });
		expect(await standing(keptId, droppedId)).not.toEqual(before);
		expect(await undo(droppedId)).toBe("undone");
		expect(await standing(keptId, droppedId)).toEqual(before);
		expect(await undo(droppedId)).toBe("not_found");
		expect(await join({ keptId, droppedId })).toBe("merged");
	});

	test("is refused once the grower was changed, or a survey asks them", async () => {
		const changed = await twins();
		await join(changed);
		await owner.query("update directory.operation set phone = '555' where operation_id = $1", [changed.keptId]);
		expect(await undo(changed.droppedId)).toBe("changed");

		const asked = await twins();
		await join(asked, { plantingIds: await plantingsOf(asked.droppedId) });
		await open(asked.crop);
		const before = await standing(asked.keptId, asked.droppedId);
		expect(await undo(asked.droppedId)).toBe("rests_on_it");
		expect(await standing(asked.keptId, asked.droppedId)).toEqual(before);
	});
});

test("pairs that look alike are of the viewer's states, until they are said to be two", async () => {
	const near = await twins({ email: "Same@pair.example" }, { email: "same@PAIR.example" });
	const far = await twins({ email: "far@pair.example" }, { email: "far@pair.example", state: "55" });
	const signs = async (viewer: Associate, { keptId, droppedId }: typeof near) => {
		const { pairs } = await asDesk(viewer, (trx) => listLikelyPairs(trx, viewer));
		return pairs.find(({ a, b }) => [keptId, droppedId].every((id) => id === a.operationId || id === b.operationId))
			?.signs;
	};
	expect(await signs(iowa, near)).toContain("email");
	expect(await signs(iowa, far)).toBeUndefined();
	expect(await signs(both, far)).toContain("email");
	const { keptId, droppedId } = near;
	expect(await asDesk(iowa, (trx) => setApart(trx, iowa, droppedId, keptId))).toBe("set");
	expect(await asDesk(iowa, (trx) => setApart(trx, iowa, keptId, droppedId))).toBe("set");
	expect(await signs(iowa, near)).toBeUndefined();
});

test("whoever leaves takes along what was merged into theirs", async () => {
	const { keptId, droppedId } = await twins({}, { contact: "Zephyrine Twin" });
	await join({ keptId, droppedId });
	const viewer = { ...growerOf(keptId), person: null };
	expect(await asGrower(viewer, (trx) => leave(trx, viewer, keptId))).toEqual({ people: [] });
	expect(
		await count(owner, "directory.operation where operation_id = any ($1) and name = '' and contact_name = ''", [
			[keptId, droppedId],
		]),
	).toBe(2);
	expect(await undo(droppedId)).toBe("not_found");
});
