import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { type Decision, FindingsQuery } from "#app/review/findings.schema.ts";
import { countOpenFindings, listFindings } from "#app/review/findings.server.ts";
import { type Closing, confirmChosen, decideFinding, undoBatch } from "#app/routes/desk/parts/checks/decide.server.ts";
import { takeDecision } from "#app/routes/desk/parts/checks/take-decision.server.ts";
import { viewFinding } from "#app/routes/desk/parts/checks/finding-view.server.ts";
import { listTallies, rebuildTallies } from "#app/tally/tally.server.ts";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import { answer, check, factOf, type FindingRow, findingsOf, oddSurvey } from "./checks-fixture.ts";
import { asDesk, count, openSurveysDatabase } from "./surveys-fixture.ts";
import { expectSameTallies } from "./tally-fixture.ts";

const { owner, iowa, other, wisconsin } = await openSurveysDatabase();

const decide = (viewer: Associate, surveyId: string, { edit_finding_id: findingId }: FindingRow, closing: Closing) =>
	asDesk(viewer, (trx) => decideFinding(trx, viewer, { surveyId, findingId }, closing));
const corrected = (pounds: number): Closing => ({
	act: "correct",
	version: 0,
	at: 0,
	seen: 0,
	reason: "Rang: one nought too many",
	answer: { kind: "given", value: pounds, given: { text: String(pounds), unit: "lb" } },
});
const setAside: Closing = { act: "set_aside", version: 0, at: 0, seen: 0, reason: "Cannot be reached" };
type Moved = { measure: { key: string }; area: { key: string }; values: (number | null)[] };
const figures = (moved: Moved[]) => moved.map(({ measure, area, values }) => [measure.key, area.key, values[1]]);
const counted = (viewer: Associate) => asDesk(viewer, (trx) => countOpenFindings(trx, viewer));
const queue = (viewer: Associate, surveyId: string, query: Record<string, string> = {}) =>
	asDesk(viewer, (trx) => listFindings(trx, viewer, surveyId, FindingsQuery.parse(query)));

/** The kept tallies are those that would be made anew from the facts. */
async function expectTalliesKept(surveyId: string) {
	const [kept, rebuilt] = await scopedTransaction({ kind: "network" }, async (trx) => {
		const before = await listTallies(trx, surveyId);
		await rebuildTallies(trx, surveyId);
		return [before, await listTallies(trx, surveyId)];
	});
	expectSameTallies(kept!, rebuilt!);
	expect(kept!.length).toBeGreaterThan(0);
}

/** A second check that finds the same answer odd. */
async function secondFinding(surveyId: string, operationId: string, findingId: string): Promise<FindingRow> {
	await owner.query(
		`insert into collect.edit_finding (response_id, check_kind, check_key, question_key, planting_id, crop_key, about, about_key)
		select response_id, 'ratio_to_last', 'ratio', question_key, planting_id, crop_key, about, about_key
		from collect.edit_finding where edit_finding_id = $1`,
		[findingId],
	);
	return (await findingsOf(owner, surveyId, operationId)).find(({ check_key }) => check_key === "ratio")!;
}

describe("a correction", () => {
	test("counts in the facts and tallies at once, and the grower's own answer stays", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 30_000 });
		expect(await decide(iowa, surveyId, findingOf("harvested"), corrected(3000))).toBe("done");
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 3000, setAside: false });
		// The loss of the very same operation follows: 40,000 less 3,000.
		expect(await factOf(owner, surveyId, operationId, "crop_loss")).toMatchObject({ y: 37_000, x: 40_000 });
		await expectTalliesKept(surveyId);
		const own = `collect.submission join collect.response using (response_id) where survey_id = $1
			and operation_id = $2 and answers @? '$.answers[*] ? (@.questionKey == "harvested" && @.value == 30000)'`;
		expect(await count(owner, own, [surveyId, operationId])).toBe(1);
		const logged = `log.event where action = 'finding.corrected' and subject_id = $1 and person_id = $2 and state_fips = '19'`;
		expect(await count(owner, logged, [findingOf("harvested").edit_finding_id, iowa.personId])).toBe(1);
		// What an answer was is in no log. Within the random digits of an id the same may stand by chance.
		const told = String.raw`log.event where detail::text ~ '(^|[^\da-f-])30000?([^\da-f-]|$)'`;
		expect(await count(owner, told)).toBe(0);
	});

	test("is not asked about again by the same check, and holds only for the answer it corrects", async () => {
		const { surveyId, operationId, plantingId, findingOf } = await oddSurvey(owner, iowa);
		await decide(iowa, surveyId, findingOf("harvested"), corrected(39_000));
		await check(surveyId);
		const outcomes = async () =>
			(await findingsOf(owner, surveyId, operationId))
				.filter(({ question_key }) => question_key === "harvested")
				.map(({ outcome }) => outcome);
		expect(await outcomes()).toEqual(["corrected"]);
		// The grower amends: their new answer counts, whatever was put in the place of the old one.
		await answer({ surveyId, operationId }, plantingId, { trees: 40, normal: 40_000, picked: 35_000 });
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 35_000 });
		await check(surveyId);
		expect(await outcomes()).toEqual(["corrected", null]);
		// And back: the correction of that answer holds again.
		await answer({ surveyId, operationId }, plantingId, { trees: 40, normal: 40_000, picked: 30_000 });
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 39_000 });
	});

	test("is taken back by opening again, and every decision stays to be read", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		const finding = findingOf("harvested");
		await decide(iowa, surveyId, finding, corrected(3000));
		expect(await decide(other, surveyId, finding, { act: "reopen", version: 1 })).toBe("done");
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 30_000 });
		await expectTalliesKept(surveyId);
		const steps = await owner.query(
			"select step, words, person_id from collect.edit_finding_step where edit_finding_id = $1 order by number",
			[finding.edit_finding_id],
		);
		expect(steps.rows).toEqual([
			{ step: "made", words: "", person_id: null },
			{ step: "corrected", words: "Rang: one nought too many", person_id: iowa.personId },
			{ step: "reopened", words: "", person_id: other.personId },
		]);
	});

	test("of what was typed with a unit is kept in pounds, and what cannot be read is told beside its field", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		const place = { surveyId, findingId: findingOf("harvested").edit_finding_id };
		const take = (act: "correct" | "preview", harvested: string, unit: string) =>
			asDesk(iowa, (trx) =>
				takeDecision(
					trx,
					iowa,
					place,
					{ act, version: 0, at: 0, seen: 0, reason: "Bushels" },
					{ values: { harvested, harvested_unit: unit }, language: "en" },
				),
			);
		expect(await take("correct", "many", "lb")).toEqual({
			outcome: "problems",
			problems: [{ field: "harvested", code: "not_a_number" }],
		});
		const preview = await take("preview", "75", "bu");
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 30_000 });
		expect(await take("correct", "75", "bu")).toEqual({ outcome: "done" });
		const { rows } = await owner.query("select bushel_lb from directory.crop where crop_key = 'apple'");
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({
			y: 75 * rows[0].bushel_lb,
		});
		// What was previewed is what it came to.
		const after = await asDesk(iowa, (trx) => viewFinding(trx, iowa, place));
		if (preview.outcome !== "preview") throw new Error(`no preview: ${preview.outcome}`);
		expect(figures(after!.moved.rows)).toEqual(figures(preview.moved.rows));
		expect(after!.moved.rows.map(({ values }) => values[0])).toEqual(preview.moved.rows.map(({ values }) => values[0]));
		expect(after!.moved.rows.some(({ values }) => values[0] !== values[1])).toBe(true);
	});
});

describe("setting aside", () => {
	test("leaves out every figure that is made of the answer, and no other", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		expect(await decide(iowa, surveyId, findingOf("harvested"), setAside)).toBe("done");
		const asideOf = async (measure: string) => (await factOf(owner, surveyId, operationId, measure))?.setAside;
		expect(await asideOf("base.harvested_lb")).toBe(true);
		expect(await asideOf("crop_loss")).toBe(true);
		expect(await asideOf("base.normal_crop_lb")).toBe(false);
		await expectTalliesKept(surveyId);
		// The same answers sent in with another number elsewhere: what was set aside stays so.
		await check(surveyId);
		expect(await asideOf("crop_loss")).toBe(true);
	});
});

describe("confirming", () => {
	test("keeps the answer and stays closed for the same values", async () => {
		const { surveyId, operationId, plantingId, findingOf } = await oddSurvey(owner, iowa);
		await decide(iowa, surveyId, findingOf("harvested"), { act: "confirm", version: 0, words: "Rang" });
		await check(surveyId);
		await answer({ surveyId, operationId }, plantingId, { trees: 41, normal: 40_000, picked: 30_000 });
		await check(surveyId);
		const finding = (await findingsOf(owner, surveyId, operationId)).find(
			({ question_key }) => question_key === "harvested",
		);
		expect(finding).toMatchObject({ outcome: "confirmed" });
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 30_000 });
	});

	test("several at once is undone at once, as far as nobody touched them since", async () => {
		const { surveyId, findings } = await oddSurvey(owner, iowa);
		const ids = findings.map(({ edit_finding_id }) => edit_finding_id);
		const stray = crypto.randomUUID();
		const done = await asDesk(iowa, (trx) => confirmChosen(trx, iowa, surveyId, [...ids, stray]));
		if (done === "not_found") throw new Error("the survey is there");
		expect(done).toMatchObject({ confirmed: 2, left: 1 });
		expect((await queue(iowa, surveyId)).total).toBe(0);
		expect((await queue(iowa, surveyId, { show: "ended" })).total).toBe(2);
		// Another's batch is not mine to undo.
		expect(await asDesk(other, (trx) => undoBatch(trx, other, surveyId, done.batchId))).toEqual({ reopened: 0 });
		await decide(other, surveyId, findings[0]!, { act: "reopen", version: 1 });
		expect(await asDesk(iowa, (trx) => undoBatch(trx, iowa, surveyId, done.batchId))).toEqual({ reopened: 1 });
		expect((await queue(iowa, surveyId)).total).toBe(2);
	});
});

describe("two at once", () => {
	test("of one finding: the second is told, and nothing of theirs is kept", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		const finding = findingOf("harvested");
		const outcomes = await Promise.all([
			decide(iowa, surveyId, finding, corrected(3000)),
			decide(other, surveyId, finding, corrected(3500)),
		]);
		expect(outcomes.toSorted()).toEqual(["changed", "done"]);
		const kept = outcomes[0] === "done" ? 3000 : 3500;
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: kept });
		const corrections = "collect.correction join collect.response using (response_id) where survey_id = $1";
		expect(await count(owner, corrections, [surveyId])).toBe(1);
		await expectTalliesKept(surveyId);
	});

	test("of one answer by two findings: the second is told too", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		const finding = findingOf("harvested");
		const second = await secondFinding(surveyId, operationId, finding.edit_finding_id);
		expect(await decide(iowa, surveyId, finding, corrected(3000))).toBe("done");
		expect(await decide(other, surveyId, second, corrected(3500))).toBe("changed");
		expect(await decide(other, surveyId, second, setAside)).toBe("changed");
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 3000, setAside: false });
	});

	test("a second window of the same person is told that it was they themselves, also by another finding", async () => {
		const { surveyId, operationId, findingOf } = await oddSurvey(owner, iowa);
		const { edit_finding_id: findingId } = findingOf("harvested");
		const { edit_finding_id: otherId } = await secondFinding(surveyId, operationId, findingId);
		const ownSetAside: Decision = { act: "set_aside", version: 0, at: 0, seen: 0, reason: "Cannot be reached" };
		const put = (viewer: Associate, id: string) =>
			asDesk(viewer, (trx) =>
				takeDecision(trx, viewer, { surveyId, findingId: id }, ownSetAside, { values: {}, language: "en" }),
			);
		expect(await decide(iowa, surveyId, findingOf("harvested"), corrected(3000))).toBe("done");
		expect(await put(iowa, findingId)).toEqual({ outcome: "changed_by_you" });
		expect(await put(other, findingId)).toEqual({ outcome: "changed" });
		expect(await put(iowa, otherId)).toEqual({ outcome: "changed_by_you" });
		expect(await put(other, otherId)).toEqual({ outcome: "changed" });
	});

	test("a press that is repeated says the same, and is kept once", async () => {
		const { surveyId, findingOf } = await oddSurvey(owner, iowa);
		const press = () => decide(iowa, surveyId, findingOf("harvested"), corrected(3000));
		expect(await Promise.all([press(), press()])).toEqual(["done", "done"]);
		// From a second window of the same person comes another value: it is not kept, and that is told.
		expect(await decide(iowa, surveyId, findingOf("harvested"), corrected(3500))).toBe("changed");
		const corrections = "collect.correction join collect.response using (response_id) where survey_id = $1";
		expect(await count(owner, corrections, [surveyId])).toBe(1);
	});

	test("an answer that the grower amended meanwhile is not corrected", async () => {
		const { surveyId, operationId, plantingId, findingOf } = await oddSurvey(owner, iowa);
		await answer({ surveyId, operationId }, plantingId, { trees: 40, normal: 4000, picked: 3000 });
		expect(await decide(iowa, surveyId, findingOf("harvested"), corrected(2000))).toBe("changed");
		expect(await factOf(owner, surveyId, operationId, "base.harvested_lb")).toMatchObject({ y: 3000 });
	});
});

describe("another state's findings", () => {
	test("are not found, listed, counted or decided, though they are there", async () => {
		const { surveyId, findings, findingOf } = await oddSurvey(owner, iowa);
		// The survey asks in Wisconsin too: the survey is found there, and Iowa's answers are not.
		await owner.query("insert into collect.survey_state values ($1, '55')", [surveyId]);
		expect(findings).toHaveLength(2);
		expect((await queue(wisconsin, surveyId)).total).toBe(0);
		expect((await queue(iowa, surveyId)).total).toBe(2);
		expect((await counted(wisconsin)).get(surveyId)).toBeUndefined();
		expect((await counted(iowa)).get(surveyId)).toBe(2);
		expect(await decide(wisconsin, surveyId, findingOf("harvested"), corrected(1))).toBe("not_found");
		const place = { surveyId, findingId: findings[0]!.edit_finding_id };
		expect(await asDesk(wisconsin, (trx) => viewFinding(trx, wisconsin, place))).toBeUndefined();
		expect(await asDesk(iowa, (trx) => viewFinding(trx, iowa, { surveyId, findingId: "' or true" }))).toBeUndefined();
		expect(await asDesk(wisconsin, (trx) => confirmChosen(trx, wisconsin, surveyId, [place.findingId]))).toMatchObject({
			confirmed: 0,
		});
	});

	test("go out of everybody's sight when the grower takes the answers back", async () => {
		const { surveyId, operationId, findings } = await oddSurvey(owner, iowa);
		const answered = "where survey_id = $1 and operation_id = $2";
		const ids = [surveyId, operationId];
		await owner.query(
			`update collect.response set withdrawn_at = now(), receipt_code = null, first_submitted_at = null, submitted_at = null
			${answered}`,
			ids,
		);
		expect((await queue(iowa, surveyId)).total).toBe(0);
		expect((await counted(iowa)).get(surveyId)).toBeUndefined();
		expect(await findingsOf(owner, surveyId, operationId)).toHaveLength(findings.length);
		await owner.query(
			`update collect.response set withdrawn_at = null, receipt_code = $3, first_submitted_at = now(),
				submitted_at = now() ${answered}`,
			[...ids, surveyId],
		);
		expect((await counted(iowa)).get(surveyId)).toBe(2);
		// What each keeps of its response is what stands there, of all findings here.
		expect(await count(owner, "collect.edit_finding")).toBeGreaterThan(0);
		const astray = `collect.edit_finding f join collect.response r using (response_id)
			where (f.survey_id, f.operation_id, f.state_fips, f.is_sent)
				is distinct from (r.survey_id, r.operation_id, r.state_fips, r.submitted_at is not null)`;
		expect(await count(owner, astray)).toBe(0);
	});
});

describe("the queue", () => {
	test("is narrowed by check, crop, area and state of the finding, and put in order", async () => {
		const { surveyId, findingOf } = await oddSurvey(owner, iowa);
		const total = async (query: Record<string, string>) => (await queue(iowa, surveyId, query)).total;
		expect(await total({ kind: "like_operations", crop: "apple", area: "19103" })).toBe(2);
		expect(await total({ area: "19" })).toBe(2);
		expect(await total({ kind: "sum" })).toBe(0);
		expect(await total({ crop: "plum" })).toBe(0);
		expect(await total({ area: "55" })).toBe(0);
		expect(await total({ state: "said_right" })).toBe(0);
		expect(await total({ kind: "'; drop", area: "' or true --" })).toBe(2);
		await decide(iowa, surveyId, findingOf("harvested"), { act: "confirm", version: 0, words: "" });
		expect(await total({ show: "ended", state: "confirmed" })).toBe(1);
		expect(await total({ show: "ended", state: "corrected" })).toBe(0);
		const rows = (await queue(iowa, surveyId, { show: "open" })).rows;
		expect(rows.map(({ questionKey, outcome }) => [questionKey, outcome])).toEqual([["normal_crop", null]]);
	});
});
