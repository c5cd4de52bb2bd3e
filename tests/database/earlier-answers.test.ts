import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import { type AnswerPlace, findAnswering } from "#app/collect/responses.server.ts";
import { showStep } from "#app/collect/show-step.ts";
import { withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addSurvey,
	answeringOf,
	askGrower,
	asGrower,
	beginAnswering,
	growerOf,
	linkOf,
	stepKeysOf,
	submit,
	typeStep,
} from "./answering-fixture.ts";
import { addOperation, addPerson, connectOwner, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let associate: Associate;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	await owner.query("insert into directory.crop values ('hazelnut', 9, 'bush', null) on conflict do nothing");
	associate = await addPerson(owner, "Iowa's associate", ["19"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const told = (trees: string, normal: string, unit = "lb") => ({
	bearing_trees: trees,
	normal_crop: normal,
	normal_crop_unit: unit,
	harvested: "10",
	harvested_unit: unit,
});

/** Answers a whole survey: the planting as given, nothing of the rest that can be left out. */
async function answerAll(grower: Grower, place: AnswerPlace, values: Record<string, string>): Promise<void> {
	for (const key of await stepKeysOf(grower, place)) {
		const typed = key.startsWith("planting-")
			? values
			: { causes: { screen_kind: "dont_know" }, next_year: { bud_set: "normal" } }[key];
		expect(await typeStep(grower, place, key, typed ?? {})).toMatch(/saved|unchanged/);
	}
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
}

/** The same grower is asked in a later season, with what the first screen then shows. */
async function askAgain(grower: Grower, operationId: string, season: number) {
	const place = { surveyId: await addSurvey(associate, true, season), operationId };
	await beginAnswering(grower, place);
	return place;
}
async function shown(grower: Grower, place: AnswerPlace) {
	const answering = await answeringOf(grower, place);
	const [first] = await stepKeysOf(grower, place);
	const { massUnit, crates, earlier } = answering;
	return showStep(answering, {}, first!, { massUnit, crates, earlier, language: "en" })!;
}

test("what was told of a planting last season is filled in with its unit, until it is answered", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	await answerAll(grower, place, told("38", "1,250", "peck"));
	const next = await askAgain(grower, place.operationId, 2032);
	const before = await shown(grower, next);
	expect(before.values).toMatchObject({
		bearing_trees: "38",
		normal_crop: "1,250",
		normal_crop_unit: "peck",
		harvested: "",
	});
	expect(before.filledIn).toEqual({ bearing_trees: { season: 2031 }, normal_crop: { season: 2031 } });
	// Nothing counts as answered before the grower has gone on with it.
	expect((await answeringOf(grower, next)).answers).toEqual([]);
	await typeStep(grower, next, step, told("41", "1,300", "peck"));
	const after = await shown(grower, next);
	expect(after.values).toMatchObject({ bearing_trees: "41", normal_crop: "1,300" });
	expect(after.filledIn).toEqual({});
});

test("the newest season counts, and a later list of plantings before it for trees alone", async () => {
	const { place, grower, plantingIds } = await askGrower(owner, associate);
	await answerAll(grower, place, told("38", "1000"));
	const second = await askAgain(grower, place.operationId, 2032);
	await answerAll(grower, second, told("36", "900"));
	const third = await askAgain(grower, place.operationId, 2033);
	expect((await shown(grower, third)).filledIn).toEqual({
		bearing_trees: { season: 2032 },
		normal_crop: { season: 2032 },
	});
	await owner.query("update directory.planting set cultivar = 'Late one' where planting_id = $1", plantingIds);
	expect((await shown(grower, third)).values).toMatchObject({ bearing_trees: "36", normal_crop: "900" });
	await owner.query("update directory.planting set bearing_trees = 20 where planting_id = $1", plantingIds);
	const { values, filledIn } = await shown(grower, third);
	expect(values).toMatchObject({ bearing_trees: "20", normal_crop: "900" });
	expect(filledIn).toEqual({ bearing_trees: "plantings", normal_crop: { season: 2032 } });
});

test("only what was sent in and stands fills in, of this operation and of earlier seasons", async () => {
	const { place, grower, step } = await askGrower(owner, associate);
	await typeStep(grower, place, step, told("38", "1000"));
	const next = await askAgain(grower, place.operationId, 2032);
	const fromList = { bearing_trees: "plantings" };
	expect((await shown(grower, next)).filledIn).toEqual(fromList);
	await answerAll(grower, place, told("38", "1000"));
	expect(Object.keys((await shown(grower, next)).filledIn)).toEqual(["bearing_trees", "normal_crop"]);
	expect(await asGrower(grower, (trx) => withdrawAnswer(trx, grower, place))).toBe("withdrawn");
	expect((await shown(grower, next)).filledIn).toEqual(fromList);
	// Another grower's answers, and this season's own, fill in nothing.
	const other = growerOf(await addOperation(owner, { state: "19" }));
	const otherPlace = await askAgain(other, other.operationIds[0]!, 2033);
	expect((await shown(other, otherPlace)).filledIn).toEqual(fromList);
	expect((await asGrower(other, (trx) => findAnswering(trx, other, next)))?.earlier).toBeUndefined();
});

test("a personal link shows of earlier seasons only what fills in the form", async () => {
	const { place, grower } = await askGrower(owner, associate);
	await answerAll(grower, place, told("38", "1000"));
	const next = await askAgain(grower, place.operationId, 2032);
	const link = linkOf(next);
	const { earlier } = await answeringOf(link, next);
	expect(earlier.map(({ answer }) => answer.questionKey)).toEqual(["bearing_trees", "normal_crop"]);
	expect(await asGrower(link, (trx) => findAnswering(trx, link, place))).toBeUndefined();
});
