import { afterAll, beforeAll, expect, test } from "vitest";
import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, askGrower, pounds, submit, typeStep } from "./answering-fixture.ts";
import { addPerson, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

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

const far = [{ check: "picked_far_above_normal", values: [5000, 1000] }];
const odd = pounds(40, 1000, 5000);
const confirmedIn = async (surveyId: string) => {
	const { rows } = await owner.query(
		`select question_key, confirmed from collect.answer join collect.response using (response_id)
		where survey_id = $1 and confirmed <> '[]' order by 1`,
		[surveyId],
	);
	return rows as { question_key: string; confirmed: object[] }[];
};

test("an odd answer is kept, and waits to be confirmed before it is sent", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	expect(await typeStep(grower, place, step, odd)).toBe("saved");
	expect(await submit(grower, place)).toEqual({ outcome: "to_check", stepKeys: [step] });
	expect(await confirmedIn(place.surveyId)).toEqual([]);

	expect(await typeStep(grower, place, step, { ...odd, confirm: "picked_far_above_normal" })).toBe("saved");
	expect(await confirmedIn(place.surveyId)).toEqual([{ question_key: "harvested", confirmed: far }]);
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
});

test("what was confirmed goes with what is sent in, and stands when nothing changes", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	await typeStep(grower, place, step, odd);
	await typeStep(grower, place, step, { ...odd, confirm: "picked_far_above_normal" });
	await submit(grower, place);
	const { rows } = await owner.query(
		`select answers -> 'answers' as answers from collect.submission join collect.response using (response_id)
		where survey_id = $1`,
		[place.surveyId],
	);
	const sent = rows[0].answers as { questionKey: string; confirmed?: object[] }[];
	expect(sent.map(({ questionKey, confirmed }) => [questionKey, confirmed])).toEqual([
		["bearing_trees", undefined],
		["normal_crop", undefined],
		["harvested", far],
	]);
	expect(await typeStep(grower, place, step, odd)).toBe("unchanged");
	expect((await answeringOf(grower, place)).response?.changedSinceSubmission).toBe(false);
	expect(await submit(grower, place)).toMatchObject({ outcome: "unchanged" });
});

test("an amended answer is asked about again, and what was confirmed of it is gone", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	await typeStep(grower, place, step, odd);
	await typeStep(grower, place, step, { ...odd, confirm: "picked_far_above_normal" });
	await submit(grower, place);
	await typeStep(grower, place, step, pounds(40, 1000, 6000));
	expect(await confirmedIn(place.surveyId)).toEqual([]);
	expect(await submit(grower, place)).toEqual({ outcome: "to_check", stepKeys: [step] });
	await typeStep(grower, place, step, pounds(40, 1000, 900));
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted", version: 2 });
});

test("only a list can stand in the column", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	await typeStep(grower, place, step, odd);
	await expect(
		owner.query("update collect.answer set confirmed = '{}' where question_key = 'harvested'"),
	).rejects.toThrow("answer_confirmed_list");
});
