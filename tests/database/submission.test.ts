import { afterAll, beforeAll, describe, expect, test } from "vitest";
import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { submitResponse } from "#app/collect/submission.server.ts";
import { withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { writeFacts } from "#app/tally/facts.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import {
	answeringOf,
	asGrower,
	askGrower,
	beginAnswering,
	countJobs,
	pounds,
	submit,
	typeStep,
} from "./answering-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

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

/** Everything that a submission leaves, as it really stands. */
async function leftBy(surveyId: string) {
	const of = "join collect.response r using (response_id) where r.survey_id = $1";
	const { rows: mailings } = await owner.query(
		"select kind, wave from collect.mailing where survey_id = $1 order by wave",
		[surveyId],
	);
	return {
		submissions: await count(owner, `collect.submission s ${of}`, [surveyId]),
		complete: await count(owner, "collect.frame_operation where survey_id = $1 and disposition = 'complete'", [
			surveyId,
		]),
		facts: await count(owner, "collect.fact where survey_id = $1", [surveyId]),
		mailings: mailings.map(({ kind, wave }) => `${kind} ${wave}`),
		jobs: await countJobs(),
	};
}

async function factsIn(surveyId: string): Promise<Record<string, [number, number]>> {
	const { rows } = await owner.query(
		"select measure_key, crop_key, y, x from collect.fact where survey_id = $1 and y is not null",
		[surveyId],
	);
	return Object.fromEntries(rows.map((row) => [`${row.measure_key} ${row.crop_key}`, [row.y, row.x]]));
}

async function snapshotOf(surveyId: string) {
	const { rows } = await owner.query(
		`select s.version, s.answers from collect.submission s join collect.response using (response_id)
		where survey_id = $1 order by s.version desc limit 1`,
		[surveyId],
	);
	return rows[0] as { version: number; answers: { plantings: object[]; answers: { questionKey: string }[] } };
}

describe("sending in", () => {
	test("facts, receipt, disposition and mail come about together", async () => {
		const { place, grower, plantingIds } = await askGrower(owner, associate, {
			more: [
				{ crop: "apple", cultivar: "Amber Dot" },
				{ crop: "plum", trees: 20 },
			],
		});
		const [first, second, plum] = plantingIds.map((id) => `planting-${id}`) as [string, string, string];
		// 100 bu of apple at 42 lb is 4,200 lb in a normal year; 1,000 lb were picked.
		await typeStep(grower, place, first, {
			...pounds(40, 0, 1000),
			normal_crop: "100",
			normal_crop_unit: "bu",
		});
		await typeStep(grower, place, second, pounds(10, 800, 0));
		await typeStep(grower, place, plum, pounds(20, 1000, 1200));
		await typeStep(grower, place, "causes", { cause_freeze: "75", cause_hail_wind: "25" });
		const before = await leftBy(place.surveyId);

		const sent = await submit(grower, place, "es");
		expect(sent).toEqual({
			outcome: "submitted",
			version: 1,
			receiptCode: expect.stringMatching(/^[34679A-HJKMNPRTW-Y]{4}-[34679A-HJKMNPRTW-Y]{4}$/),
		});
		expect(await leftBy(place.surveyId)).toEqual({
			submissions: 1,
			complete: 1,
			facts: 26,
			mailings: ["receipt 1"],
			// The receipt's mail, and the look for odd answers.
			jobs: before.jobs + 2,
		});
		// By hand: apple 5,000 normal and 1,000 picked over 50 trees; with plum 6,000 and 2,200 over 70.
		expect(await factsIn(place.surveyId)).toEqual({
			"crop_loss apple": [4000, 5000],
			"crop_loss plum": [-200, 1000],
			"crop_loss all": [3800, 6000],
			"freeze_loss apple": [3000, 5000],
			"freeze_loss plum": [0, 1000],
			"freeze_loss all": [2850, 6000],
			"total_loss apple": [0, 1],
			"total_loss plum": [0, 1],
			"total_loss all": [0, 1],
			"yield_per_tree apple": [1000, 50],
			"yield_per_tree plum": [1200, 20],
			"base.bearing_trees apple": [50, 1],
			"base.bearing_trees plum": [20, 1],
			"base.bearing_trees all": [70, 1],
			"base.normal_crop_lb apple": [5000, 1],
			"base.normal_crop_lb plum": [1000, 1],
			"base.normal_crop_lb all": [6000, 1],
			"base.harvested_lb apple": [1000, 1],
			"base.harvested_lb plum": [1200, 1],
			"base.harvested_lb all": [2200, 1],
		});
		const { rows } = await owner.query(
			`select distinct f.owner_id = o.owner_id as owned, f.county_fips, f.state_fips, f.stratum_key, f.set_aside
			from collect.fact f join directory.operation o using (operation_id) where survey_id = $1`,
			[place.surveyId],
		);
		expect(rows).toEqual([
			{ owned: true, county_fips: "19103", state_fips: "19", stratum_key: "IA-medium", set_aside: false },
		]);
		const { response } = await answeringOf(grower, place);
		expect(response).toMatchObject({ submittedVersion: 1, changedSinceSubmission: false, ...receiptOf(sent) });
		expect(await count(owner, "collect.response where survey_id = $1 and language = 'es'", [place.surveyId])).toBe(1);
	});

	test("an owner and county that change after the frame was frozen do not move the facts", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await owner.query("update directory.operation set county_fips = '19113' where operation_id = $1", [
			place.operationId,
		]);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await submit(grower, place);
		expect(await count(owner, "collect.fact where survey_id = $1 and county_fips = '19103'", [place.surveyId])).toBe(
			(await leftBy(place.surveyId)).facts,
		);
		expect((await leftBy(place.surveyId)).facts).toBeGreaterThan(0);
	});

	test("a required question without an answer is named by its step, and nothing is written", async () => {
		const { place, grower, plantingIds, step } = await askGrower(owner, associate, { more: [{ crop: "plum" }] });
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		const before = await leftBy(place.surveyId);
		expect(await submit(grower, place)).toEqual({ outcome: "unfinished", stepKeys: [`planting-${plantingIds[1]}`] });
		expect(await leftBy(place.surveyId)).toEqual(before);
		expect(before).toMatchObject({ submissions: 0, facts: 0, mailings: [] });
	});

	test("answers that a condition hides are dropped from what is sent in", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 0));
		await typeStep(grower, place, "causes", { cause_freeze: "100" });
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await submit(grower, place);
		const { answers } = await snapshotOf(place.surveyId);
		expect(answers.answers.map(({ questionKey }) => questionKey)).toEqual([
			"bearing_trees",
			"normal_crop",
			"harvested",
		]);
		expect((await answeringOf(grower, place)).answers.map(({ questionKey }) => questionKey)).toContain("cause_freeze");
		expect((await answeringOf(grower, place)).response?.changedSinceSubmission).toBe(false);
		// Not asked since nothing was lost: freeze took nothing.
		expect((await factsIn(place.surveyId))["freeze_loss apple"]).toEqual([0, 4000]);
	});

	test.each([
		["not known", { harvested: "", harvested_kind: "dont_know" }],
		["refused", { harvested: "", harvested_kind: "refused" }],
	])("a harvest that is %s makes no fact that needs it", async (_how, typed) => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, { ...pounds(40, 4000, 0), ...typed });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
		expect(await factsIn(place.surveyId)).toEqual({
			"base.bearing_trees apple": [40, 1],
			"base.bearing_trees all": [40, 1],
			"base.normal_crop_lb apple": [4000, 1],
			"base.normal_crop_lb all": [4000, 1],
		});
		// Asked and not told: counted where it is missing.
		const { rows } = await owner.query(
			"select measure_key from collect.tally where survey_id = $1 and crop_key = 'apple' and unanswered = 1 order by 1",
			[place.surveyId],
		);
		expect(rows.map((row) => row.measure_key)).toEqual([
			"base.harvested_lb",
			"crop_loss",
			"first_harvest",
			"freeze_loss",
			"last_harvest",
			"total_loss",
			"yield_per_tree",
		]);
	});

	test("a harvest of zero is a whole loss, and causes that were skipped make no fact", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 0));
		await submit(grower, place);
		const facts = await factsIn(place.surveyId);
		expect(facts["total_loss apple"]).toEqual([1, 1]);
		expect(facts["crop_loss apple"]).toEqual([4000, 4000]);
		expect(facts["freeze_loss apple"]).toBeUndefined();
		await typeStep(grower, place, "causes", { cause_hail_wind: "100" });
		await submit(grower, place);
		expect((await factsIn(place.surveyId))["freeze_loss apple"]).toEqual([0, 4000]);
	});
});

describe("once", () => {
	test("two at the same moment make one response, one submission and one receipt", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		const { jobs } = await leftBy(place.surveyId);
		const sent = await Promise.all([submit(grower, place), submit(grower, place), submit(grower, place)]);
		const outcomes = sent.map((one) => (typeof one === "string" ? one : one.outcome));
		expect(outcomes.toSorted()).toEqual(["submitted", "unchanged", "unchanged"]);
		expect(new Set(sent.map((one) => receiptOf(one).receiptCode)).size).toBe(1);
		expect(await count(owner, "collect.response where survey_id = $1", [place.surveyId])).toBe(1);
		expect(await leftBy(place.surveyId)).toMatchObject({ submissions: 1, mailings: ["receipt 1"], jobs: jobs + 2 });
	});

	test("the second of two waits for the first, and then finds that it is sent in", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		let second: ReturnType<typeof submit> | undefined;
		let secondDone = false;
		await asGrower(grower, async (trx) => {
			expect(await submitResponse(trx, grower, place, "en")).toMatchObject({ outcome: "submitted" });
			second = submit(grower, place).finally(() => {
				secondDone = true;
			});
			await new Promise((wait) => setTimeout(wait, 300));
			expect(secondDone).toBe(false);
		});
		expect(await second).toMatchObject({ outcome: "unchanged", version: 1 });
		expect(await leftBy(place.surveyId)).toMatchObject({ submissions: 1, mailings: ["receipt 1"] });
	});

	test("sending in again without a change gives the same receipt and writes nothing", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		const first = await submit(grower, place);
		// Changed and changed back: what would be sent is what was sent.
		await typeStep(grower, place, step, pounds(40, 4000, 0));
		expect((await answeringOf(grower, place)).response?.changedSinceSubmission).toBe(true);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		const before = await leftBy(place.surveyId);
		expect(await submit(grower, place)).toEqual({ outcome: "unchanged", version: 1, ...receiptOf(first) });
		expect(await leftBy(place.surveyId)).toEqual(before);
	});

	test("a transaction that fails afterwards leaves neither submission, facts, mailing nor job", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		const before = await leftBy(place.surveyId);
		const failing = asGrower(grower, async (trx) => {
			expect(await submitResponse(trx, grower, place, "en")).toMatchObject({ outcome: "submitted", version: 1 });
			throw new Error("stop here");
		});
		await expect(failing).rejects.toThrow("stop here");
		expect(await leftBy(place.surveyId)).toEqual(before);
		expect(before).toMatchObject({ submissions: 0, complete: 0, facts: 0, mailings: [] });
		expect((await answeringOf(grower, place)).response).toMatchObject({ receiptCode: null, submittedVersion: 0 });
	});

	test("a survey closes after what is being sent in, or before it", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		let closing: Promise<unknown> | undefined;
		const order: string[] = [];
		await asGrower(grower, async (trx) => {
			expect(await submitResponse(trx, grower, place, "en")).toMatchObject({ outcome: "submitted" });
			closing = asDesk(associate, (desk) => closeSurvey(desk, associate, place.surveyId)).then(() =>
				order.push("closed"),
			);
			await new Promise((wait) => setTimeout(wait, 300));
			order.push("sent");
		});
		await closing;
		expect(order).toEqual(["sent", "closed"]);
		expect((await leftBy(place.surveyId)).submissions).toBe(1);
	});
});

describe("amending", () => {
	test("an amendment makes the next version under the same code, with new facts and a second receipt", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 1000));
		await typeStep(grower, place, "causes", { cause_freeze: "100" });
		const first = await submit(grower, place);
		const before = await leftBy(place.surveyId);
		expect(Object.keys(await factsIn(place.surveyId))).toContain("freeze_loss apple");
		await typeStep(grower, place, step, pounds(40, 4000, 2000));
		await typeStep(grower, place, "causes", { cause_freeze: "", screen_kind: "dont_know" });
		expect((await answeringOf(grower, place)).response?.changedSinceSubmission).toBe(true);

		expect(await submit(grower, place)).toEqual({ outcome: "submitted", version: 2, ...receiptOf(first) });
		expect(await leftBy(place.surveyId)).toMatchObject({
			submissions: 2,
			mailings: ["receipt 1", "receipt 2"],
			jobs: before.jobs + 1,
		});
		const facts = await factsIn(place.surveyId);
		expect(facts["crop_loss apple"]).toEqual([2000, 4000]);
		expect(Object.keys(facts)).not.toContain("freeze_loss apple");
		const { rows } = await owner.query(
			`select action from log.event join collect.response on subject_id = response_id::text
			where survey_id = $1 order by event_id`,
			[place.surveyId],
		);
		expect(rows.map(({ action }) => action)).toEqual(["response.started", "response.submitted", "response.amended"]);
	});

	test("what review set aside stays set aside while the grower says the same", async () => {
		const { place, grower, step, plantingIds } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 1000));
		await submit(grower, place);
		await owner.query(
			`insert into collect.correction (response_id, question_key, planting_id, act, was, made_by)
			select response_id, question, $2, 'set_aside', jsonb_build_object('kind', 'given', 'value', told), $3
			from collect.response, (values ('normal_crop', 4000), ('harvested', 1000)) v(question, told) where survey_id = $1`,
			[place.surveyId, plantingIds[0], associate.personId],
		);
		await typeStep(grower, place, step, pounds(40, 4000, 1500));
		await submit(grower, place);
		const { rows } = await owner.query(
			`select distinct measure_key, set_aside from collect.fact
			where survey_id = $1 and measure_key in ('base.normal_crop_lb', 'base.harvested_lb') order by 1`,
			[place.surveyId],
		);
		expect(rows).toEqual([
			{ measure_key: "base.harvested_lb", set_aside: false },
			{ measure_key: "base.normal_crop_lb", set_aside: true },
		]);
	});

	test("what was sent in cannot be rewritten by the application", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 1000));
		await submit(grower, place);
		const rewrite = asGrower(grower, (trx) =>
			trx.updateTable("collect.submission").set({ answers: "[]" }).where("version", "=", 1).execute(),
		);
		await expect(rewrite).rejects.toMatchObject({ code: "42501" });
		expect((await snapshotOf(place.surveyId)).answers.answers).toHaveLength(3);
	});
});

function receiptOf(sent: Awaited<ReturnType<typeof submit>>): { receiptCode: string } {
	if (typeof sent === "string" || !("receiptCode" in sent)) throw new Error("nothing was sent in");
	return { receiptCode: sent.receiptCode };
}

const close = (surveyId: string) => asDesk(associate, (trx) => closeSurvey(trx, associate, surveyId));

describe("after the closing", () => {
	test("what was begun before is kept as late, with a receipt, and counts nowhere", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 1000));
		await close(place.surveyId);
		expect(await answeringOf(grower, place)).toMatchObject({ isOpen: false, isLate: true });
		expect(await typeStep(grower, place, "causes", { cause_freeze: "100" })).toBe("saved");
		const sent = await submit(grower, place);
		expect(sent).toMatchObject({ outcome: "submitted", version: 1 });
		const { receiptCode } = sent as { receiptCode: string };
		expect(await submit(grower, place)).toEqual({ outcome: "unchanged", version: 1, receiptCode });
		const counts = { submissions: 1, complete: 0, facts: 0, mailings: ["receipt 1"] };
		expect(await leftBy(place.surveyId)).toMatchObject(counts);
		const late = "collect.submission join collect.response using (response_id) where late and survey_id = $1";
		expect(await count(owner, late, [place.surveyId])).toBe(1);
		const { response } = await answeringOf(grower, place);
		expect(response).toMatchObject({ submittedAt: null, lateAt: expect.any(Date), changedSinceSubmission: false });
	});

	test("what was sent in before stays what counts, and what comes late stands beside it", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await submit(grower, place);
		const before = await factsIn(place.surveyId);
		const inTime = (await answeringOf(grower, place)).response?.submittedAt;
		await close(place.surveyId);
		await typeStep(grower, place, step, pounds(40, 4000, 3000));
		await typeStep(grower, place, "causes", { cause_freeze: "100" });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted", version: 2 });
		expect(await factsIn(place.surveyId)).toEqual(before);
		expect((await snapshotOf(place.surveyId)).version).toBe(2);
		const { response } = await answeringOf(grower, place);
		await asGrower(grower, (trx) => writeFacts(trx, response!.responseId));
		expect(await factsIn(place.surveyId)).toEqual(before);
		expect(response).toMatchObject({ submittedAt: inTime, lateAt: expect.any(Date) });
	});

	test("opened again, the survey counts what is then sent in", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await owner.query("update collect.survey set closes_at = now() - interval '1 minute' where survey_id = $1", [
			place.surveyId,
		]);
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
		await owner.query("update collect.survey set closes_at = now() + interval '1 day' where survey_id = $1", [
			place.surveyId,
		]);
		await typeStep(grower, place, step, pounds(41, 4000, 4000));
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted", version: 2 });
		expect(await leftBy(place.surveyId)).toMatchObject({ submissions: 2, complete: 1 });
		expect((await answeringOf(grower, place)).response).toMatchObject({ lateAt: null, submittedAt: expect.any(Date) });
	});

	test("what came late can be withdrawn, and nobody begins after the closing", async () => {
		const { place, grower, step } = await askGrower(owner, associate);
		await typeStep(grower, place, step, pounds(40, 4000, 4000));
		await close(place.surveyId);
		await submit(grower, place);
		expect(await asGrower(grower, (trx) => withdrawAnswer(trx, grower, place))).toBe("withdrawn");
		const other = await askGrower(owner, associate, { begin: false });
		await close(other.place.surveyId);
		expect(await beginAnswering(other.grower, other.place)).toBe("closed");
		expect(await answeringOf(other.grower, other.place)).toMatchObject({ isOpen: false, isLate: false });
	});
});
