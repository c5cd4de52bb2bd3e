import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Client } from "pg";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { keepStep } from "#app/collect/keep-step.server.ts";
import { findAnswering, startResponse } from "#app/collect/responses.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	addPlanting,
	addSurvey,
	answeringOf,
	asGrower,
	askGrower,
	beginAnswering,
	growerOf,
	linkOf,
	pounds,
	stepKeysOf,
	submit,
	typeStep,
} from "./answering-fixture.ts";
import { addOperation, addPerson, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

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

const answersIn = (surveyId: string, more = "") =>
	count(owner, `collect.answer a join collect.response r using (response_id) where r.survey_id = $1 ${more}`, [
		surveyId,
	]);
const agree = { language: "en", pledgeVersion: "2026-1" } as const;

describe("what is asked", () => {
	test("an operation is asked about its standing plantings of the frame's crops, in the order of crops", async () => {
		const { place, grower, plantingIds } = await askGrower(owner, associate, {
			name: "Larch Creek Orchard",
			more: [
				{ crop: "plum", trees: 7 },
				{ crop: "apple", cultivar: "Amber Dot", trees: 3 },
				{ crop: "apple", removedOn: "2020-04-01" },
				{ crop: "pawpaw" },
			],
		});
		await addPlanting(owner, place.operationId, { crop: "hazelnut" });
		const answering = await answeringOf(grower, place);
		expect(answering).toMatchObject({
			operationName: "Larch Creek Orchard",
			countyName: "Johnson",
			timeZone: "America/Chicago",
			season: 2031,
			isOpen: true,
			massUnit: "lb",
			language: "en",
			answers: [],
			response: { draftVersion: 0, submittedVersion: 0, receiptCode: null, changedSinceSubmission: false },
		});
		expect(answering.plantings.map(({ plantingId }) => plantingId)).toEqual([
			plantingIds[0],
			plantingIds[2],
			plantingIds[1],
		]);
		expect(answering.plantings[1]).toMatchObject({ cultivar: "Amber Dot", bearingTrees: 3, bushelLb: 42 });
	});

	test("what was pulled out since the survey opened is asked about, and before it only what was answered about", async () => {
		const { place, grower, plantingIds, step } = await askGrower(owner, associate, { more: [{ crop: "plum" }] });
		const pullOut = (day: string) =>
			owner.query("update directory.planting set removed_on = $2 where operation_id = $1", [place.operationId, day]);
		const asked = async () => (await answeringOf(grower, place)).plantings.map(({ plantingId }) => plantingId);
		await pullOut("2031-08-01");
		expect(await asked()).toEqual(plantingIds);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await pullOut("2020-08-01");
		expect(await asked()).toEqual([plantingIds[0]]);
	});

	test("a planting written down after the survey opened and pulled out again is not asked about", async () => {
		const { place, grower, plantingIds } = await askGrower(owner, associate);
		const plantingId = await addPlanting(owner, place.operationId, { crop: "apple", cultivar: "By mistake" });
		expect((await answeringOf(grower, place)).plantings).toHaveLength(2);
		await owner.query("update directory.planting set removed_on = current_date where planting_id = $1", [plantingId]);
		const { plantings } = await answeringOf(grower, place);
		expect(plantings.map((planting) => planting.plantingId)).toEqual(plantingIds);
	});

	test("causes are asked when something was lost, or may have been", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		const rest = ["harvest_days", "next_year"];
		expect(await stepKeysOf(grower, place)).toEqual([step, "causes", ...rest]);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		expect(await stepKeysOf(grower, place)).toEqual([step, ...rest]);
		await typeStep(grower, place, step, pounds(40, 4000, 3999));
		expect(await stepKeysOf(grower, place)).toEqual([step, "causes", ...rest]);
	});
});

describe("beginning", () => {
	test("the pledge agreed to first is the one that is kept, and its version with it", async () => {
		const { place, grower } = await askGrower(owner, associate, { begin: false });
		expect((await answeringOf(grower, place)).response).toBeNull();
		expect(await beginAnswering(grower, place)).toBe("started");
		const again = asGrower(grower, (trx) =>
			startResponse(trx, grower, place, { language: "es", pledgeVersion: "2099-1" }),
		);
		expect(await again).toBe("already_started");
		const { rows } = await owner.query(
			"select response_id, language, pledge_version from collect.response where survey_id = $1",
			[place.surveyId],
		);
		expect(rows).toMatchObject([{ language: "en", pledge_version: "2026-1" }]);
		expect(
			await count(owner, "collect.frame_operation where survey_id = $1 and disposition = 'partial'", [place.surveyId]),
		).toBe(1);
		expect(await count(owner, "log.event where subject_id = $1", [rows[0].response_id])).toBe(1);
	});

	test("beginning twice at once makes one response", async () => {
		const { place, grower } = await askGrower(owner, associate, { begin: false });
		const outcomes = await Promise.all([beginAnswering(grower, place), beginAnswering(grower, place)]);
		expect(outcomes.toSorted()).toEqual(["already_started", "started"]);
		expect(await count(owner, "collect.response where survey_id = $1", [place.surveyId])).toBe(1);
	});

	test("nothing is kept before the pledge was agreed to", async () => {
		const { place, grower, step } = await askGrower(owner, associate, { begin: false });
		expect(await typeStep(grower, place, step, pounds(40, 4000, 0))).toBe("not_started");
		expect(await submit(grower, place)).toBe("not_started");
		expect(await answersIn(place.surveyId)).toBe(0);
	});
});

describe("keeping a step", () => {
	test("pounds are kept, with what was typed and its unit beside them", async () => {
		const { place, grower, step, plantingIds } = await askGrower(owner, associate);
		const typed = { bearing_trees: "40", normal_crop: "40", normal_crop_unit: "bu", harvested: "$1,200 lb" };
		expect(await typeStep(grower, place, step, { ...typed, harvested_unit: "bu" })).toBe("saved");
		const { answers, response } = await answeringOf(grower, place);
		expect(response?.draftVersion).toBe(1);
		const plantingId = plantingIds[0];
		expect(answers).toEqual([
			{ questionKey: "bearing_trees", plantingId, kind: "given", value: 40, given: { text: "40" } },
			{ questionKey: "harvested", plantingId, kind: "given", value: 1200, given: { text: "$1,200 lb", unit: "lb" } },
			{ questionKey: "normal_crop", plantingId, kind: "given", value: 1680, given: { text: "40", unit: "bu" } },
		]);
	});

	test("don't know, refused, skipped and zero are four different rows, or none", async () => {
		const { place, grower, step, plantingIds } = await askGrower(owner, associate);
		await typeStep(grower, place, step, {
			bearing_trees: "",
			bearing_trees_kind: "dont_know",
			normal_crop: "",
			normal_crop_kind: "refused",
			harvested: "0",
			harvested_unit: "lb",
		});
		await typeStep(grower, place, "harvest_days", { first_harvest: "", last_harvest: "" });
		const { rows } = await owner.query(
			`select question_key, planting_id, kind, value from collect.answer join collect.response using (response_id)
			where survey_id = $1 order by 1`,
			[place.surveyId],
		);
		const planting_id = plantingIds[0];
		expect(rows).toEqual([
			{ question_key: "bearing_trees", planting_id, kind: "dont_know", value: null },
			{ question_key: "harvested", planting_id, kind: "given", value: 0 },
			{ question_key: "normal_crop", planting_id, kind: "refused", value: null },
		]);
	});

	test("what a grower's crate holds is known at the next survey, and to nobody else", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		const crates = { normal_crop: "100", normal_crop_unit: "crate", normal_crop_crate: "38.5" };
		await typeStep(grower, place, step, { ...pounds(40, 0, 10), ...crates });
		const next = { ...place, surveyId: await addSurvey(associate) };
		expect((await answeringOf(grower, next)).crates).toEqual({ apple: 38.5 });
		const other = await askGrower(owner, associate);
		expect((await answeringOf(other.grower, other.place)).crates).toEqual({});
	});

	test("a step saved again replaces what it held, and the same answers change nothing", async () => {
		const { place, grower } = await askGrower(owner, associate);
		const days = { first_harvest: "2031-09-01", last_harvest: "2031-10-01" };
		expect(await typeStep(grower, place, "harvest_days", days)).toBe("saved");
		expect(await typeStep(grower, place, "harvest_days", days)).toBe("unchanged");
		expect((await answeringOf(grower, place)).response?.draftVersion).toBe(1);
		expect(await typeStep(grower, place, "harvest_days", { ...days, first_harvest: "" })).toBe("saved");
		const { answers, response } = await answeringOf(grower, place);
		expect(answers.map(({ questionKey, value }) => [questionKey, value])).toEqual([["last_harvest", "2031-10-01"]]);
		expect(response?.draftVersion).toBe(2);
	});

	test("saving one step leaves the others and the other plantings alone", async () => {
		const { place, grower, plantingIds } = await askGrower(owner, associate, { more: [{ crop: "plum" }] });
		const [apple, plum] = plantingIds.map((id) => `planting-${id}`) as [string, string];
		await typeStep(grower, place, apple, pounds(40, 4000, 4000));
		await typeStep(grower, place, plum, pounds(7, 700, 70));
		await typeStep(grower, place, apple, pounds(41, 4000, 4000));
		const { answers } = await answeringOf(grower, place);
		const trees = answers.filter(({ questionKey }) => questionKey === "bearing_trees");
		expect(trees.map(({ plantingId, value }) => [plantingId, value]).toSorted()).toEqual(
			[
				[plantingIds[0], 41],
				[plantingIds[1], 7],
			].toSorted(),
		);
		expect(answers).toHaveLength(6);
	});

	test("answers that a condition hides are kept while editing", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 0));
		await typeStep(grower, place, "causes", { cause_freeze: "100" });
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		expect(await stepKeysOf(grower, place)).not.toContain("causes");
		expect(await answersIn(place.surveyId, "and question_key = 'cause_freeze' and value = '100'")).toBe(1);
		expect(await typeStep(grower, place, "causes", { cause_freeze: "50" })).toBe("step_not_found");
	});

	test("text is kept as it was typed, markup and all", async () => {
		const { place, grower } = await askGrower(owner, associate);
		const comment = `<b onclick="x()">Frío</b> & 'quotes'; drop table\u0000 \u{1f34e}\ud800`;
		expect(await typeStep(grower, place, "next_year", { comment, bud_set: "_dont_know" })).toBe("saved");
		const { answers } = await answeringOf(grower, place);
		expect(answers).toEqual([
			{ questionKey: "bud_set", plantingId: null, kind: "dont_know", value: null, given: null },
			{
				questionKey: "comment",
				plantingId: null,
				kind: "given",
				value: `<b onclick="x()">Frío</b> & 'quotes'; drop table \u{1f34e}\ufffd`,
				given: null,
			},
		]);
	});

	test("two megabytes of text are refused and nothing is kept", async () => {
		const { place, grower } = await askGrower(owner, associate);
		const typed = { comment: "x".repeat(2_000_000), bud_set: "light" };
		expect(await typeStep(grower, place, "next_year", typed)).toEqual(["comment: too_long_limit"]);
		expect(await answersIn(place.surveyId)).toBe(0);
	});

	test("a save waits for one that is under way, and adds to what it left", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		let second: ReturnType<typeof typeStep> | undefined;
		await asGrower(grower, async (trx) => {
			const light = { questionKey: "bud_set", plantingId: null, kind: "given", value: "light", given: null } as const;
			expect(await keepStep(trx, grower, place, "next_year", [light])).toMatchObject({ outcome: "saved" });
			second = typeStep(grower, place, step, pounds(40, 4000, 4000));
			await new Promise((wait) => setTimeout(wait, 300));
		});
		expect(await second).toBe("saved");
		expect((await answeringOf(grower, place)).response?.draftVersion).toBe(2);
	});

	test("two devices that save different steps at once both keep theirs", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		const outcomes = await Promise.all([
			typeStep(grower, place, step, pounds(40, 4000, 4000)),
			typeStep(grower, place, "next_year", { bud_set: "heavy" }),
		]);
		expect(outcomes).toEqual(["saved", "saved"]);
		const { answers, response } = await answeringOf(grower, place);
		expect([answers.length, response?.draftVersion]).toEqual([4, 2]);
	});
});

describe("whose answers", () => {
	test("another operation's place is not found, though it is there", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		const stranger = growerOf(await addOperation(owner, { state: "19" }));
		// The second has the first's place in its list without the right to it in the transaction, as a forged list would.
		for (const viewer of [stranger, growerOf(place.operationId)]) {
			const asStranger = <T>(work: Parameters<typeof asGrower<T>>[1]) => asGrower(stranger, work);
			expect(await asStranger((trx) => findAnswering(trx, viewer, place))).toBeUndefined();
			expect(await asStranger((trx) => startResponse(trx, viewer, place, agree))).toBe("not_found");
			expect(await asStranger((trx) => keepStep(trx, viewer, place, step, []))).toBe("not_found");
		}
		// And the other way round: a transaction that sees the place does not open it to one who has no right to it.
		const seeing = await scopedTransaction({ kind: "network" }, (trx) => findAnswering(trx, stranger, place));
		expect(seeing).toBeUndefined();
		expect(await submit(stranger, place)).toBe("not_found");
		expect(await answersIn(place.surveyId)).toBe(3);
		expect((await answeringOf(grower, place)).answers).toHaveLength(3);
	});

	test("a personal link opens its own survey and operation only", async () => {
		const { place, grower } = await askGrower(owner, associate);
		const later = { surveyId: await addSurvey(associate), operationId: place.operationId };
		expect(await asGrower(grower, (trx) => findAnswering(trx, grower, later))).toBeDefined();
		const byLink = linkOf(place);
		expect(await asGrower(byLink, (trx) => findAnswering(trx, byLink, place))).toBeDefined();
		expect(await asGrower(byLink, (trx) => findAnswering(trx, byLink, later))).toBeUndefined();
		expect(await asGrower(byLink, (trx) => startResponse(trx, byLink, later, agree))).toBe("not_found");
		expect(await count(owner, "collect.frame_operation where survey_id = $1", [later.surveyId])).toBeGreaterThan(0);
	});

	test("a draft, an operation that joined later and an address that is no id are not found", async () => {
		const { place, grower } = await askGrower(owner, associate);
		const draft = { surveyId: await addSurvey(associate, false), operationId: place.operationId };
		expect(await count(owner, "collect.survey where survey_id = $1", [draft.surveyId])).toBe(1);
		expect(await asGrower(grower, (trx) => findAnswering(trx, grower, draft))).toBeUndefined();
		const late = growerOf(await addOperation(owner, { state: "19" }));
		const latePlace = { surveyId: place.surveyId, operationId: late.operationIds[0]! };
		expect(await asGrower(late, (trx) => findAnswering(trx, late, latePlace))).toBeUndefined();
		const forged = { surveyId: "' or true --", operationId: place.operationId };
		expect(await asGrower(grower, (trx) => findAnswering(trx, grower, forged))).toBeUndefined();
	});

	test("a step of another operation's planting, or one that is made up, is no step", async () => {
		const { place, grower } = await askGrower(owner, associate);
		const other = await askGrower(owner, associate);
		const theirs = other.plantingIds[0]!;
		const save = (stepKey: string, plantingId: string | null = null) =>
			asGrower(grower, (trx) =>
				keepStep(trx, grower, place, stepKey, [
					{ questionKey: "bearing_trees", plantingId, kind: "given", value: 1, given: { text: "1" } },
				]),
			);
		expect(await count(owner, "directory.planting where planting_id = $1", [theirs])).toBe(1);
		expect(await save(`planting-${theirs}`, theirs)).toBe("step_not_found");
		expect(await save("next_year", theirs)).toBe("step_not_found");
		expect(await save("next_year")).toBe("step_not_found");
		expect(await save("constructor")).toBe("step_not_found");
		expect(await answersIn(place.surveyId)).toBe(0);
	});
});

describe("a closed survey", () => {
	test.each([
		["by hand", "closed_at = now() - interval '15 days'"],
		["by time", "closes_at = now() - interval '14 days 1 second', opened_at = now() - interval '20 days'"],
	])("closed %s two weeks ago takes no answer and still shows those it has", async (_how, change) => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await owner.query(`update collect.survey set ${change} where survey_id = $1`, [place.surveyId]);
		expect(await typeStep(grower, place, step, pounds(40, 4000, 0))).toBe("closed");
		expect(await submit(grower, place)).toBe("closed");
		expect(await beginAnswering(grower, place)).toBe("closed");
		const answering = await answeringOf(grower, place);
		expect([answering.isOpen, answering.answers.length]).toEqual([false, 3]);
		expect(await answersIn(place.surveyId, "and question_key = 'harvested' and value = '4000'")).toBe(1);
		const submissions = "collect.submission join collect.response using (response_id) where survey_id = $1";
		expect(await count(owner, submissions, [place.surveyId])).toBe(0);
	});
});
