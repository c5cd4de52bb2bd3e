import { beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { decideLate } from "#app/collect/late-answers.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { joinStrata, respondentsByStratum } from "#app/estimate/strata.ts";
import { giveCode, readCoding } from "#app/routes/desk/parts/checks/coding.server.ts";
import { type Closing, decideFinding } from "#app/routes/desk/parts/checks/decide.server.ts";
import { merge } from "#app/routes/desk/parts/merging/merge-steps.server.ts";
import { leave } from "#app/routes/grower/parts/leaving.server.ts";
import { writeFacts } from "#app/tally/facts.server.ts";
import { listFrameStrata, listTallies, rebuildTallies } from "#app/tally/tally.server.ts";
import {
	addSurvey,
	answeringOf,
	asGrower,
	beginAnswering,
	growerOf,
	pounds,
	submit,
	typeStep,
} from "./answering-fixture.ts";
import { addOrchards, answer, check, findingsOf, orchards } from "./checks-fixture.ts";
import { asDesk, openSurveysDatabase } from "./surveys-fixture.ts";
import { expectSameTallies } from "./tally-fixture.ts";

// One survey and all that can become of its answers, each by the function that a page calls. What is kept has to be what
// would be made of the answers from nothing.

const { owner, iowa } = await openSurveysDatabase();
const ordinary = { trees: 40, normal: 4000, picked: 3000 };
let surveyId: string;
let growers: { operationId: string; plantingId: string }[];
const placeOf = (at: number) => ({ surveyId, operationId: growers[at]!.operationId });
const viewerOf = (at: number) => growerOf(growers[at]!.operationId);

beforeAll(async () => {
	const told = orchards({ trees: 40, normal: 40_000, picked: 30_000 });
	// The last two have not answered.
	growers = await addOrchards(owner, [...told, ordinary, ordinary]);
	surveyId = await addSurvey(iowa);
	for (const [at, one] of told.entries()) await answer(placeOf(at), growers[at]!.plantingId, one);
	await check(surveyId);
});

async function sendIn(at: number, causes: Record<string, string> = {}, words?: string) {
	await beginAnswering(viewerOf(at), placeOf(at));
	await typeStep(viewerOf(at), placeOf(at), `planting-${growers[at]!.plantingId}`, pounds(40, 4000, 3000));
	if (words !== undefined) {
		await typeStep(viewerOf(at), placeOf(at), "causes", causes);
		await typeStep(viewerOf(at), placeOf(at), "next_year", { other_cause: words });
	}
	return submit(viewerOf(at), placeOf(at));
}

const withdraw = (at: number) => asGrower(viewerOf(at), (trx) => withdrawAnswer(trx, viewerOf(at), placeOf(at)));

async function decide(question: string, closing: Closing) {
	const findings = await findingsOf(owner, surveyId, growers[9]!.operationId);
	const { edit_finding_id: findingId } = findings.find((one) => one.question_key === question && !one.outcome)!;
	return asDesk(iowa, (trx) => decideFinding(trx, iowa, { surveyId, findingId }, closing));
}

async function code(key: string) {
	const found = await asDesk(iowa, (trx) => readCoding(trx, iowa, surveyId, { show: "open" }));
	const { responseId, questionKey, plantingId, seen } = found!.rows[0]!;
	const given = { responseId, questionKey, plantingId, seen, code: key };
	return asDesk(iowa, (trx) => giveCode(trx, iowa, surveyId, given));
}

async function takeInLate(at: number) {
	const { response } = await answeringOf(viewerOf(at), placeOf(at));
	const late = { surveyId, responseId: response!.responseId, version: response!.submittedVersion };
	return asDesk(iowa, (trx) => decideLate(trx, iowa, { ...late, take: true, reason: "Mail came late." }));
}

const inNetwork = <T>(work: Parameters<typeof scopedTransaction<T>>[1]) => scopedTransaction({ kind: "network" }, work);
const kept = () => inNetwork((trx) => listTallies(trx, surveyId));

const facts = async () =>
	(
		await owner.query(
			`select operation_id, measure_key, crop_key, county_fips, stratum_key, owner_id, y, x, is_day, set_aside
			from collect.fact where survey_id = $1 order by 1, 2, 3`,
			[surveyId],
		)
	).rows;

const words = async () =>
	(
		await owner.query("select * from collect.word_told where survey_id = $1 order by response_id, question_key", [
			surveyId,
		])
	).rows;

async function wordsToldAnew() {
	await owner.query("select collect.recount_words($1)", [surveyId]);
	return words();
}

const rebuilt = () =>
	inNetwork(async (trx) => {
		await trx.deleteFrom("collect.tally").where("survey_id", "=", surveyId).execute();
		await rebuildTallies(trx, surveyId);
		return listTallies(trx, surveyId);
	});

async function madeAnew() {
	await inNetwork(async (trx) => {
		await trx.deleteFrom("collect.fact").where("survey_id", "=", surveyId).execute();
		const rows = trx.selectFrom("collect.response").where("survey_id", "=", surveyId).select("response_id");
		for (const { response_id } of await rows.execute()) await writeFacts(trx, response_id);
	});
	return facts();
}

/** How many count in a measure that every answer has, and how many of the frame they may stand for. */
async function counts() {
	const tallies = (await kept()).filter((one) => one.measureKey === "base.bearing_trees" && one.cropKey === "apple");
	const frame = await inNetwork((trx) => listFrameStrata(trx, surveyId));
	const { strata } = joinStrata(
		frame.filter(({ cropKey }) => cropKey === "apple"),
		respondentsByStratum(tallies),
	);
	return strata.map(({ respondents, frameSize }) => [respondents, frameSize]);
}

/** Operations whose disposition is other than their answers: whom to write to is told by it alone. */
async function wrongDispositions() {
	const { rows } = await owner.query(
		`select f.operation_id, f.disposition from collect.frame_operation f left join collect.response r using (survey_id, operation_id)
		where survey_id = $1 and (f.disposition = 'complete') <> (r.submitted_at is not null)`,
		[surveyId],
	);
	return rows;
}

test("through a survey's whole life facts, tallies and words to code stay what the answers would make from nothing", async () => {
	const corrected: Closing = {
		act: "correct",
		version: 0,
		at: 0,
		seen: 0,
		reason: "Rang: one nought too many",
		answer: { kind: "given", value: 3000, given: { text: "3000", unit: "lb" } },
	};
	const aside: Closing = { act: "set_aside", version: 0, at: 0, seen: 0, reason: "Cannot be reached" };
	const pair = { keptId: growers[4]!.operationId, droppedId: growers[10]!.operationId };
	expect(await counts()).toEqual([[10, 12]]);

	const steps: [string, () => Promise<unknown>, unknown, [number, number]][] = [
		["an answer is corrected", () => decide("harvested", corrected), "done", [10, 12]],
		["an answer is set aside", () => decide("normal_crop", aside), "done", [10, 12]],
		[
			"a grower amends",
			() => answer(placeOf(0), growers[0]!.plantingId, { ...ordinary, picked: 1 }),
			undefined,
			[10, 12],
		],
		["a grower takes back", () => withdraw(1), "withdrawn", [9, 12]],
		["another takes back", () => withdraw(2), "withdrawn", [8, 12]],
		["and comes again", () => sendIn(2), { outcome: "submitted" }, [9, 12]],
		["one tells words", () => sendIn(3, { cause_freeze: "40", cause_other: "60" }, "the cold"), {}, [9, 12]],
		["words get a code", () => code("cause_freeze"), "coded", [9, 12]],
		[
			"two are one",
			() => asDesk(iowa, (trx) => merge(trx, iowa, pair, { take: [], plantingIds: [] })),
			"merged",
			[9, 11],
		],
		["one leaves", () => asGrower(viewerOf(5), (trx) => leave(trx, viewerOf(5), growers[5]!.operationId)), {}, [8, 11]],
		["one begins", () => beginAnswering(viewerOf(11), placeOf(11)), {}, [8, 11]],
		["it closes", () => asDesk(iowa, (trx) => closeSurvey(trx, iowa, surveyId)), expect.anything(), [8, 11]],
		["the last comes late", () => sendIn(11), { outcome: "submitted" }, [8, 11]],
		["and is taken in", () => takeInLate(11), "taken", [9, 11]],
	];
	for (const [what, step, outcome, count] of steps) {
		const came = await step();
		if (typeof outcome === "object" && outcome !== null) expect(came, what).toMatchObject(outcome);
		else expect(came, what).toEqual(outcome);
		expect(await counts(), what).toEqual([count]);
		expect(await wrongDispositions(), what).toEqual([]);
		const now = await kept();
		expectSameTallies(await rebuilt(), now);
		const told = await words();
		expect(await wordsToldAnew(), what).toEqual(told);
	}

	expect(await words()).toMatchObject([{ words: "the cold", codes: ["cause_freeze"] }]);
	const before = await facts();
	const tallies = await kept();
	expect(new Set(before.map((row) => row.operation_id)).size).toBe(9);
	expect(before.some((row) => row.set_aside)).toBe(true);
	expect(await madeAnew()).toEqual(before);
	expectSameTallies(await kept(), tallies);
});
