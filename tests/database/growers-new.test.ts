import { expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { listFrozenFrames } from "#app/collect/frozen-frames.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { createOperation, findLookAlikes, type NewOperation } from "#app/directory/new-operation.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import {
	addPlanting,
	changePlanting,
	listPlantings,
	pullOutPlanting,
	putBackPlanting,
} from "#app/directory/plantings.server.ts";
import { addOperation, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, wisconsin } = await openSurveysDatabase();

const apples = {
	cropKey: "apple",
	cultivar: "Amber Dot",
	bearingTrees: 120,
	youngTrees: 0,
	areaAcres: 2,
	plantedYear: 2012,
} as const;
const newcomer = (more: Partial<NewOperation> = {}): NewOperation => ({
	name: "Sumac Ridge Orchard",
	contactName: "Lena Fairbrook",
	phone: null,
	email: null,
	countyFips: "19103",
	language: "es",
	massUnit: "bu",
	ownerName: "Fairbrook Family",
	ownerId: null,
	plantings: [apples],
	...more,
});
const write = (viewer: Associate, more: Partial<NewOperation>) =>
	asDesk(viewer, (trx) => createOperation(trx, viewer, newcomer(more)));
const create = async (viewer: Associate, more: Partial<NewOperation> = {}) => {
	const made = await write(viewer, more);
	if (typeof made === "string") throw new Error(made);
	return made.operationId;
};
const logged = async (operationId: string) => {
	const { rows } = await owner.query("select action, detail from log.event where subject_id = $1 order by event_id", [
		operationId,
	]);
	return rows as { action: string; detail: object }[];
};

test("a grower is written down with owner and plantings, and is found", async () => {
	const operationId = await create(iowa);
	const found = await asDesk(iowa, (trx) => findOperation(trx, iowa, operationId));
	expect(found).toMatchObject({ ownerName: "Fairbrook Family", language: "es", massUnit: "bu", status: "active" });
	expect(found?.plantings).toMatchObject([apples]);
	expect((await logged(operationId)).map(({ action }) => action)).toEqual([
		"operation.added",
		"operation.planting_kept",
	]);
});

test("a county outside the granted states is unknown, and so is an owner of another state's growers", async () => {
	const theirs = await addOperation(owner, { state: "55" });
	const { rows } = await owner.query("select owner_id from directory.operation where operation_id = $1", [theirs]);
	const ownerId = rows[0].owner_id as string;
	expect(await write(iowa, { countyFips: "55025" })).toBe("unknown_county");
	expect(await write(iowa, { ownerId })).toBe("unknown_owner");
	const second = await create(wisconsin, { ownerId, countyFips: "55025", plantings: [] });
	const owners = await owner.query("select owner_id from directory.operation where operation_id = $1", [second]);
	expect(owners.rows).toEqual([{ owner_id: ownerId }]);
});

test("who looks like a grower of the list is told before saving, and so is an owner of that name", async () => {
	const name = "Heron Slough Orchards";
	const known = await create(iowa, {
		name,
		ownerName: "Slough Sisters",
		email: "mail@heronslough.example",
		phone: "(555) 010-4477",
	});
	const alike = (more: Partial<NewOperation>) =>
		asDesk(iowa, (trx) => findLookAlikes(trx, iowa, newcomer({ name: "Plain Name", contactName: "No One", ...more })));
	for (const more of [
		{ name: "Heron Slough Orchard" },
		{ email: "MAIL@heronslough.example" },
		{ phone: "555.010.4477" },
	])
		expect((await alike(more)).likely.map(({ operationId }) => operationId)).toEqual([known]);
	expect(await alike({ name: "Quite Another", ownerName: "slough sisters" })).toMatchObject({
		likely: [],
		owners: [{ name: "Slough Sisters", operations: [name] }],
	});
	const elsewhere = await asDesk(wisconsin, (trx) => findLookAlikes(trx, wisconsin, newcomer({ name })));
	expect(elsewhere.likely).toEqual([]);
});

test("an associate keeps the plantings of the granted states' growers, and a survey under way keeps its frame", async () => {
	const operationId = await create(iowa);
	const made = await asDesk(iowa, (trx) => createSurvey(trx, iowa, draftOf(["19"])));
	if (!made.surveyId) throw new Error("the survey was not made");
	const { surveyId } = made;
	expect(await asDesk(iowa, (trx) => openSurvey(trx, iowa, surveyId, async () => {}))).toBe("opened");
	const planting = (await asDesk(iowa, (trx) => listPlantings(trx, iowa, operationId)))!.plantings[0]!;
	const place = { operationId, plantingId: planting.plantingId };
	const frames = () => asDesk(iowa, (trx) => listFrozenFrames(trx, iowa, operationId));
	const frozen = [{ surveyId, crops: [{ cropKey: "apple", bearingTrees: 120 }] }];
	expect(await frames()).toMatchObject(frozen);

	expect(await asDesk(iowa, (trx) => changePlanting(trx, iowa, place, { ...apples, bearingTrees: 90 }))).toBe(
		"changed",
	);
	expect(await asDesk(iowa, (trx) => addPlanting(trx, iowa, operationId, { ...apples, cropKey: "plum" }))).toBe(
		"added",
	);
	expect(await asDesk(iowa, (trx) => pullOutPlanting(trx, iowa, place, "2025-11-03"))).toBe("pulled_out");
	expect(await frames()).toMatchObject(frozen);
	expect(await asDesk(iowa, (trx) => putBackPlanting(trx, iowa, place))).toBe("put_back");
	expect((await logged(operationId)).slice(2).map(({ detail }) => detail)).toEqual(
		["changed", "added", "pulled_out", "put_back"].map((what) => ({ what })),
	);

	const before = (await asDesk(iowa, (trx) => listPlantings(trx, iowa, operationId)))!.plantings;
	expect(before).toHaveLength(2);
	const other = (trx: Parameters<Parameters<typeof asDesk>[1]>[0]) => changePlanting(trx, wisconsin, place, apples);
	expect(await asDesk(wisconsin, other)).toBe("not_found");
	expect((await asDesk(iowa, (trx) => listPlantings(trx, iowa, operationId)))!.plantings).toEqual(before);
});
