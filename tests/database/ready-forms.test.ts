import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { type ReadyFormKey, readyFormKeys, readyForms } from "#app/collect/forms/ready-forms.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { closeSurvey, openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey, findSurvey } from "#app/collect/surveys.server.ts";
import { computeReleaseDraft } from "#app/jobs/compute-release-draft.server.ts";
import { networkRules } from "#app/jobs/network-rules.ts";
import { toldCrops } from "#app/lib/told-crops.ts";
import { createDraft, findLatestDraft, listDraftCells } from "#app/release/drafts.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addPlanting,
	answeringOf,
	beginAnswering,
	growerOf,
	pounds,
	stepKeysOf,
	submit,
	typeStep,
} from "./answering-fixture.ts";
import { addOperation, addPerson, asDesk, connectOwner, draftOf, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let associate: Associate;
const operationIds: string[] = [];

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	associate = await addPerson(owner, "Iowa's associate", ["19"]);
	for (let i = 0; i < 7; i++) {
		const operationId = await addOperation(owner, { state: "19", name: `Orchard ${i}`, email: null, trees: 40 + i });
		await addPlanting(owner, operationId, { crop: "plum", trees: 20 });
		operationIds.push(operationId);
	}
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const pest = (key: string, trees: string, severity: string, fruit: string): StepValues => ({
	[`${key}_trees`]: trees,
	[`${key}_severity`]: severity,
	[`${key}_fruit`]: fruit,
});
const bloomDays = (i: number): StepValues => ({
	first_bloom: `2031-05-0${i + 1}`,
	full_bloom: `2031-05-1${i}`,
	petal_fall: "2031-05-20",
});
/** What a grower types, by the beginning of the step's key; `{}` goes on without an answer. */
const typed: Record<ReadyFormKey, (i: number) => [string, StepValues][]> = {
	bloom_watch: (i) => [
		["planting-", { bloom_density: i % 2 ? "light" : "normal", ...bloomDays(i) }],
		["bees", { bee_weather: i < 3 ? "poor" : "good" }],
		["note", {}],
	],
	after_freeze: (i) => [
		["night", { coldest_day: "2031-05-04", coldest: "-2,5", coldest_unit: "celsius", hours_below: "4" }],
		["planting-", { stage: "full_bloom", buds_cut: "50", buds_dead: String(5 * i) }],
		["protection", { protection: i < 2 ? ["water", "fans"] : "none" }],
		["photos", {}],
		["note", { comment: "Cold air lay in the low rows." }],
	],
	pests: (i) => [
		["planting-", { seen: i % 2 ? ["japanese_beetle"] : "none" }],
		["japanese_beetle-", pest("japanese_beetle", "20%", "moderate", "marked")],
		["photos", {}],
		["note", {}],
	],
	after_harvest: (i) => [
		["planting-", pounds(40, 4000, 400 * i)],
		["causes", { cause_freeze: "100" }],
		["harvest_days", { first_harvest: `2031-09-0${i + 1}`, last_harvest: "2031-10-02" }],
		["next_year", { bud_set: "normal" }],
	],
};

async function open(formKey: ReadyFormKey): Promise<string> {
	const draft = draftOf(["19"], { formKey, crops: ["apple", "plum"], titleEn: undefined, titleEs: undefined });
	return asDesk(associate, async (trx) => {
		const { surveyId } = (await createSurvey(trx, associate, draft)) as { surveyId: string };
		expect(await openSurvey(trx, associate, surveyId)).toBe("opened");
		return surveyId;
	});
}

/** Goes through the steps as they come, which depend on what was answered before. */
async function answer(formKey: ReadyFormKey, surveyId: string, i: number): Promise<string[]> {
	const place = { surveyId, operationId: operationIds[i]! };
	const grower = growerOf(place.operationId);
	await beginAnswering(grower, place);
	const done: string[] = [];
	for (;;) {
		const next = (await stepKeysOf(grower, place)).find((key) => !done.includes(key));
		if (next === undefined) break;
		const values = typed[formKey](i).find(([start]) => next.startsWith(start))?.[1];
		if (!values) throw new Error(`nothing is typed for ${next}`);
		expect(`${next} ${String(await typeStep(grower, place, next, values, "es"))}`).toMatch(/ (saved|unchanged)$/);
		done.push(next);
	}
	expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	return done.map((key) => key.replace(/-.*/, ""));
}

describe.each(readyFormKeys)("a survey of the form %s", (formKey) => {
	const form = readyForms[formKey];
	test("is opened, answered, closed and drafted for release", async () => {
		const surveyId = await open(formKey);
		const survey = await asDesk(associate, (trx) => findSurvey(trx, associate, surveyId));
		expect(survey).toMatchObject({ title: form.title, formTitle: form.title, minutes: form.minutes });
		for (const i of operationIds.keys()) await answer(formKey, surveyId, i);
		const { rows } = await owner.query(
			"select distinct measure_key from collect.fact where survey_id = $1 and crop_key = 'apple'",
			[surveyId],
		);
		const ofApple = form.measures.filter(({ crops }) => crops?.includes("apple") ?? true);
		expect(rows.map(({ measure_key }) => measure_key).toSorted()).toEqual(ofApple.map(({ key }) => key).toSorted());

		await asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));
		const made = await asDesk(associate, (trx) => createDraft(trx, associate, surveyId, networkRules));
		if (made.outcome !== "drafted") throw new Error(made.outcome);
		await computeReleaseDraft({ releaseDraftId: made.releaseDraftId });
		const latest = await asDesk(associate, (trx) => findLatestDraft(trx, associate, surveyId));
		expect(latest).toMatchObject({ status: "audited", method: { formKey, all: { asked: 7, answered: 7 } } });
		const cells = await asDesk(associate, (trx) => listDraftCells(trx, made.releaseDraftId));
		const network = cells.find((cell) => cell.areaKey === "network" && cell.cropKey === "apple");
		expect(network).toMatchObject({ status: "shown", respondents: 7 });
		const published = form.measures.filter(({ base }) => !base);
		const keysOf = (measures: typeof published) => measures.map(({ key }) => key).toSorted();
		const told = published.filter((one) => toldCrops(one, form.screens, ["apple", "plum"]).includes("apple"));
		expect(network?.figures?.map(({ measureKey }) => measureKey).toSorted()).toEqual(keysOf(told));
		const all = cells.find((cell) => cell.areaKey === "network" && cell.cropKey === "all");
		const across = published.filter(({ acrossCrops }) => acrossCrops);
		expect(all?.figures?.map(({ measureKey }) => measureKey).toSorted()).toEqual(keysOf(across));
	});
});

test("the figures are those of the answers", async () => {
	const { rows } = await owner.query(
		`select v.definition ->> 'key' as form, f.measure_key as measure, sum(f.y) as y, sum(f.x) as x
		from collect.fact f join collect.survey s using (survey_id) join collect.form_version v using (form_version_id)
		where f.crop_key = 'apple' group by 1, 2`,
	);
	const figure = (form: string, measure: string) => {
		const row = rows.find((one) => one.form === form && one.measure === measure);
		return row && [Number(row.y), Number(row.x)];
	};
	// Seven operations with 40 to 46 apple trees: 301 in all.
	expect(figure("bloom_watch", "light_bloom")).toEqual([41 + 43 + 45, 301]);
	expect(figure("bloom_watch", "poor_bee_weather")).toEqual([3, 7]);
	const days = [...operationIds.keys()].reduce((sum, i) => sum + 121 + i, 0);
	expect(figure("bloom_watch", "first_bloom")).toEqual([days, 7]);
	const killed = operationIds.reduce((sum, _, i) => sum + ((40 + i) * 5 * i) / 50, 0);
	expect(figure("after_freeze", "killed_bloom")).toEqual([expect.closeTo(killed, 9), 301]);
	expect(figure("after_freeze", "protected")).toEqual([2, 7]);
	expect(figure("pests", "japanese_beetle_trees")).toEqual([expect.closeTo((41 + 43 + 45) * 0.2, 9), 301]);
	expect(figure("pests", "japanese_beetle_severity")).toEqual([2 * (41 + 43 + 45), 301]);
	expect(figure("pests", "scab_seen")).toEqual([0, 7]);
	expect(figure("after_harvest", "freeze_loss")).toEqual([28_000 - 400 * 21, 28_000]);
});

test("a pest is asked about where it was seen, and nowhere else", async () => {
	const surveyId = await open("pests");
	expect(await answer("pests", surveyId, 0)).toEqual(["planting", "planting", "note"]);
	expect(await answer("pests", surveyId, 1)).toEqual([
		"planting",
		"planting",
		"japanese_beetle",
		"japanese_beetle",
		"photos",
		"note",
	]);
	const place = { surveyId, operationId: operationIds[1]! };
	const { plantings } = await answeringOf(growerOf(place.operationId), place);
	const plum = plantings.find(({ cropKey }) => cropKey === "plum")!;
	const wrong = typeStep(growerOf(place.operationId), place, `planting-${plum.plantingId}`, { seen: ["scab"] });
	expect(await wrong).toEqual(["seen: choice_wrong"]);
});

test("a temperature is kept in degrees Fahrenheit, below zero too, with what was typed", async () => {
	const { rows } = await owner.query(`select distinct value, given from collect.answer where question_key = 'coldest'`);
	expect(rows).toEqual([{ value: 27.5, given: { text: "-2,5", unit: "celsius" } }]);
});
