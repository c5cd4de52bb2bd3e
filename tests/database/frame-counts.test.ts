import { sql } from "kysely";
import { expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { listCallCells } from "#app/collect/calls.server.ts";
import { startResponse } from "#app/collect/responses.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { addOperation, asDesk, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

// How many of a frame are where is kept by triggers: here all that can happen to a frame, by one hand and by many at once.

const { owner, iowa, both } = await openSurveysDatabase();

/** A survey of apples and plums, opened as the desk does. */
async function openedFrame(trees: number[]) {
	// Those of a survey before are in no later one.
	await owner.query("update directory.operation set status = 'left'");
	const ids: string[] = [];
	for (const [i, count] of trees.entries()) {
		ids.push(await addOperation(owner, { state: i % 3 === 0 ? "55" : "19", trees: count }));
		if (i % 2 === 0)
			await owner.query(
				"insert into directory.planting (operation_id, crop_key, bearing_trees) values ($1, 'plum', 7)",
				[ids.at(-1)],
			);
	}
	const draft = draftOf(["19", "55"], { crops: ["apple", "plum"] });
	const { surveyId } = await asDesk(both, (trx) => createSurvey(trx, both, draft));
	expect(await asDesk(both, (trx) => openSurvey(trx, both, surveyId!))).toBe("opened");
	return { surveyId: surveyId!, ids };
}

const counts = async (surveyId: string) =>
	(
		await owner.query(
			"select * from collect.frame_count where survey_id = $1 and operations <> 0 order by 2, 3, 4, 5, 6, 7",
			[surveyId],
		)
	).rows as { crop_key: string; disposition: string; operations: number; bearing_trees: number }[];

/** What is kept must be what counting from nothing gives. */
async function expectKept(surveyId: string) {
	const kept = await counts(surveyId);
	await owner.query("select collect.recount_frame($1)", [surveyId]);
	expect(kept).toEqual(await counts(surveyId));
	return kept;
}

const growerOf = (operationId: string): Grower => ({
	role: "grower",
	operationIds: [operationId],
	link: null,
	person: null,
});
const begin = (surveyId: string, operationId: string) =>
	scopedTransaction({ kind: "grower", operationIds: [operationId] }, (trx) =>
		startResponse(trx, growerOf(operationId), { surveyId, operationId }, { language: "en", pledgeVersion: "1" }),
	);

test("counts follow whatever happens to a frame, and come out as if counted anew", async () => {
	const { surveyId, ids } = await openedFrame([40, 300, 5000, 60, 70, 80, 900]);
	const opened = await expectKept(surveyId);
	const sum = (crop: string, key: "operations" | "bearing_trees", rows = opened) =>
		rows.filter(({ crop_key }) => crop_key === crop).reduce((total, row) => total + row[key], 0);
	expect([sum("all", "operations"), sum("apple", "operations"), sum("plum", "operations")]).toEqual([7, 7, 4]);
	expect([sum("all", "bearing_trees"), sum("plum", "bearing_trees")]).toEqual([6478, 28]);

	expect(await begin(surveyId, ids[1]!)).toBe("started");
	const begun = (await expectKept(surveyId)).filter(({ disposition }) => disposition === "partial");
	expect(begun.map((row) => [row.crop_key, row.operations, row.bearing_trees])).toEqual([
		["all", 1, 300],
		["apple", 1, 300],
	]);
	const ofFrame = "where survey_id = $1 and operation_id = $2";
	for (const change of [
		`update collect.frame_operation set disposition = 'complete' ${ofFrame}`,
		`update collect.frame_operation set disposition_at = now() ${ofFrame}`,
		`update collect.frame_operation set state_fips = '55', county_fips = '55025', stratum_key = 'WI:large',
			size_class = 'large' ${ofFrame}`,
		`update collect.frame_crop set bearing_trees = bearing_trees + 5 ${ofFrame}`,
		`delete from collect.frame_crop ${ofFrame} and crop_key = 'plum'`,
		`delete from collect.frame_crop ${ofFrame}`,
		`delete from collect.frame_operation ${ofFrame}`,
	]) {
		await owner.query(change, [surveyId, ids[2]]);
		await expectKept(surveyId);
	}
	expect(sum("all", "operations", await counts(surveyId))).toBe(6);
	await owner.query("update collect.frame_operation set disposition = 'refused' where survey_id = $1", [surveyId]);
	await expectKept(surveyId);
});

test("many who begin at once wait for each other and are all counted", async () => {
	const { surveyId, ids } = await openedFrame(Array.from({ length: 16 }, (_, i) => 20 + i * 90));
	await Promise.all(ids.map((id) => begin(surveyId, id)));
	const kept = await expectKept(surveyId);
	expect(new Set(kept.map(({ disposition }) => disposition))).toEqual(new Set(["partial"]));
});

test("a desk is told of its states alone", async () => {
	const { surveyId } = await openedFrame([50, 60, 70]);
	const cells = await asDesk(iowa, (trx) => listCallCells(trx, { ...iowa, stateFips: ["19", "55"] }, surveyId));
	expect(cells.map(({ countyFips, frameSize }) => [countyFips, frameSize])).toEqual([["19103", 2]]);
	const seen = await scopedTransaction({ kind: "grower", operationIds: [] }, (trx) =>
		sql`select from collect.frame_count`.execute(trx),
	);
	expect(seen.rows).toEqual([]);
	expect(await counts(surveyId)).not.toEqual([]);
});
