import type { Client } from "pg";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import { keepStep } from "#app/collect/keep-step.server.ts";
import { findOpenStep } from "#app/collect/progress.ts";
import { readWell } from "#app/collect/read-well.ts";
import type { AnswerPlace } from "#app/collect/responses.server.ts";
import type { SentChange } from "#app/collect/step-change.ts";
import type { StepValues } from "#app/collect/step-fields.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, asGrower, askGrower, pounds, submit, typeStep } from "./answering-fixture.ts";
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

/** Keeps a step while it is being typed, as its page does. */
async function keep(
	grower: Grower,
	place: AnswerPlace,
	stepKey: string,
	values: StepValues,
	sent: Partial<SentChange> = {},
) {
	const answering = await answeringOf(grower, place);
	const { answers, unread } = readWell(answering, stepKey, values, {
		language: "en",
		season: 2031,
		today: "2031-12-01",
	})!;
	const change = { seen: 0, changeId: null, unsure: [], ...sent };
	const kept = await asGrower(grower, (trx) =>
		keepStep(trx, grower, place, stepKey, answers, { sent: change, unread }),
	);
	return typeof kept === "string" ? kept : { ...kept, unread };
}

async function heldBy(grower: Grower, place: AnswerPlace): Promise<Record<string, unknown>> {
	const { answers } = await answeringOf(grower, place);
	return Object.fromEntries(answers.map(({ questionKey, kind, value }) => [questionKey, value ?? kind]));
}

describe("keeping a step while it is typed", () => {
	test("what reads well is kept, and what does not is named while what it held stays", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		const typed = {
			bearing_trees: "40",
			normal_crop: "4000",
			normal_crop_unit: "lb",
			harvested: "",
			harvested_unit: "lb",
		};
		expect(await keep(grower, place, step, typed)).toEqual({ outcome: "saved", version: 1, unread: [] });
		expect(await heldBy(grower, place)).toEqual({ bearing_trees: 40, normal_crop: 4000 });
		const next = { ...typed, normal_crop: "4000 what", harvested: "100" };
		expect(await keep(grower, place, step, next, { seen: 1 })).toEqual({
			outcome: "saved",
			version: 2,
			unread: ["normal_crop"],
		});
		expect(await heldBy(grower, place)).toEqual({ bearing_trees: 40, normal_crop: 4000, harvested: 100 });
	});

	test("an emptied box takes its answer away", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 100));
		await keep(grower, place, step, { ...pounds(40, 4000, 100), harvested: "" }, { seen: 1 });
		expect(await heldBy(grower, place)).toEqual({ bearing_trees: 40, normal_crop: 4000 });
	});

	test("shares are kept one by one, and must make a hundred before they are sent in", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 100));
		await keep(grower, place, "causes", { cause_freeze: "60", cause_other: "x" });
		expect(await heldBy(grower, place)).toMatchObject({ cause_freeze: 60 });
		const { definition, plantings, answers } = await answeringOf(grower, place);
		expect(findOpenStep(definition, plantings, answers)?.key).toBe("causes");
		expect(await submit(grower, place)).toEqual({ outcome: "unfinished", stepKeys: ["causes"] });
		await keep(grower, place, "causes", { cause_freeze: "60", cause_other: "40" }, { seen: 1 });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	});

	test("days in the wrong order are kept, and must be mended before they are sent in", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await keep(grower, place, "harvest_days", { first_harvest: "2031-09-20", last_harvest: "2031-09-02" });
		expect(await submit(grower, place)).toEqual({ outcome: "unfinished", stepKeys: ["harvest_days"] });
		await keep(grower, place, "harvest_days", { first_harvest: "2031-09-20", last_harvest: "2031-09-22" }, { seen: 1 });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	});

	test("a step that is not asked any more is kept, and left out when all is sent in", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		expect(await keep(grower, place, "causes", { cause_freeze: "100" })).toMatchObject({ outcome: "saved" });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
		const { rows } = await owner.query(
			"select s.answers from collect.submission s join collect.response r using (response_id) where survey_id = $1",
			[place.surveyId],
		);
		expect(JSON.stringify(rows)).not.toContain("cause_freeze");
	});
});

describe("two devices", () => {
	test("what was typed upon an older version is not written over what another device gave meanwhile", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		expect(await keep(grower, place, step, pounds(40, 4000, 100))).toMatchObject({ outcome: "saved", version: 1 });
		const stale = await keep(grower, place, step, pounds(40, 4000, 900));
		expect(stale).toMatchObject({ outcome: "changed_elsewhere", version: 1 });
		expect(await heldBy(grower, place)).toMatchObject({ harvested: 100 });
		expect(await keep(grower, place, step, pounds(40, 4000, 900), { seen: 1 })).toMatchObject({ version: 2 });
		expect(await heldBy(grower, place)).toMatchObject({ harvested: 900 });
	});

	test("half a word typed upon an older version does not pass for agreement", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await keep(grower, place, step, pounds(40, 4000, 100));
		const half = { ...pounds(40, 4000, 100), harvested: "9x" };
		expect(await keep(grower, place, step, half)).toMatchObject({ outcome: "changed_elsewhere" });
	});

	test("different steps do not meet", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await keep(grower, place, step, pounds(40, 4000, 4000));
		expect(await keep(grower, place, "next_year", { bud_set: "light" })).toMatchObject({
			outcome: "saved",
			version: 1,
		});
	});

	test("a change that is sent again, or comes after the one that followed it, changes nothing", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		const first = { seen: 0, changeId: "change-1" };
		const second = { seen: 0, changeId: "change-2", unsure: ["change-1"] };
		expect(await keep(grower, place, step, pounds(40, 4000, 1), first)).toMatchObject({ version: 1 });
		expect(await keep(grower, place, step, pounds(40, 4000, 1), first)).toMatchObject({
			outcome: "unchanged",
			version: 1,
		});
		expect(await keep(grower, place, step, pounds(40, 4000, 2), second)).toMatchObject({ version: 2 });
		expect(await keep(grower, place, step, pounds(40, 4000, 1), first)).toMatchObject({ outcome: "changed_elsewhere" });
		expect(await heldBy(grower, place)).toMatchObject({ harvested: 2 });
		expect((await answeringOf(grower, place)).response?.draftVersion).toBe(2);
	});
});
