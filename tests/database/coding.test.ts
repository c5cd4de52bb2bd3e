import { describe, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { giveCode, readCoding } from "#app/routes/desk/parts/checks/coding.server.ts";
import { askGrower, beginAnswering, growerOf, pounds, stepKeysOf, submit, typeStep } from "./answering-fixture.ts";
import { factOf } from "./checks-fixture.ts";
import { addOperation, asDesk, count, draftOf, openSurveysDatabase } from "./surveys-fixture.ts";

const { owner, iowa, other, wisconsin } = await openSurveysDatabase();

/** A grower who lost a thousand of four thousand pounds, six tenths of it to something else. */
async function lostToOther(words: string) {
	const { place, grower, step } = await askGrower(owner, iowa);
	const write = async (text: string) => {
		await typeStep(grower, place, step, pounds(40, 4000, 3000));
		await typeStep(grower, place, "causes", { cause_freeze: "40", cause_other: "60" });
		await typeStep(grower, place, "next_year", { other_cause: text });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
	};
	await write(words);
	return { ...place, write };
}

const rowsOf = async (viewer: Associate, surveyId: string, show: "open" | "done" = "open") =>
	(await asDesk(viewer, (trx) => readCoding(trx, viewer, surveyId, { show })))?.rows ?? [];
const code = (
	viewer: Associate,
	surveyId: string,
	{ responseId, questionKey, plantingId, seen }: Awaited<ReturnType<typeof rowsOf>>[number],
	key: string | undefined,
) => asDesk(viewer, (trx) => giveCode(trx, viewer, surveyId, { responseId, questionKey, plantingId, seen, code: key }));
const freezeLoss = (surveyId: string, operationId: string) => factOf(owner, surveyId, operationId, "freeze_loss");

describe("words for another cause", () => {
	test("count under their code at once, and stay as they were told", async () => {
		const { surveyId, operationId } = await lostToOther("the cold in May");
		expect(await freezeLoss(surveyId, operationId)).toMatchObject({ y: 400, x: 4000 });
		const [row] = await rowsOf(iowa, surveyId);
		expect(row).toMatchObject({ words: "the cold in May", codes: null, suggested: ["cause_freeze"] });
		expect(await code(iowa, surveyId, row!, "cause_freeze")).toBe("coded");
		// 40 and 60 of a hundred of the thousand pounds lost.
		expect(await freezeLoss(surveyId, operationId)).toMatchObject({ y: 1000, x: 4000 });
		expect(await rowsOf(iowa, surveyId)).toEqual([]);
		expect(await rowsOf(iowa, surveyId, "done")).toMatchObject([
			{ codes: ["cause_freeze"], codedBy: iowa.displayName },
		]);
		const told = `collect.submission join collect.response using (response_id) where survey_id = $1
			and answers @? '$.answers[*] ? (@.value == "the cold in May")' and answers @? '$.answers[*] ? (@.value == 60)'`;
		expect(await count(owner, told, [surveyId])).toBe(1);
		expect(await count(owner, "log.event where action = 'finding.coded' and person_id = $1", [iowa.personId])).toBe(1);
	});

	test("can be given another code, or none, and other words are to be coded anew", async () => {
		const { surveyId, operationId, write } = await lostToOther("late frost");
		await code(iowa, surveyId, (await rowsOf(iowa, surveyId))[0]!, "cause_freeze");
		expect(await code(iowa, surveyId, (await rowsOf(iowa, surveyId, "done"))[0]!, undefined)).toBe("uncoded");
		expect(await freezeLoss(surveyId, operationId)).toMatchObject({ y: 400 });
		expect(await rowsOf(iowa, surveyId, "done")).toMatchObject([{ codes: [] }]);
		await write("no pickers to be had");
		expect(await rowsOf(iowa, surveyId)).toMatchObject([{ words: "no pickers to be had", codes: null }]);
		await write("late frost");
		expect(await rowsOf(iowa, surveyId, "done")).toMatchObject([{ words: "late frost", codes: [] }]);
	});

	test("coded by two at once: the second is told, and one code is kept", async () => {
		const { surveyId } = await lostToOther("hail and deer");
		const [row] = await rowsOf(iowa, surveyId);
		expect(row?.suggested.toSorted()).toEqual(["cause_hail_wind", "cause_pests"]);
		const outcomes = await Promise.all([
			code(iowa, surveyId, row!, "cause_hail_wind"),
			code(other, surveyId, row!, "cause_pests"),
		]);
		expect(outcomes.toSorted()).toEqual(["changed", "coded"]);
		expect(await rowsOf(iowa, surveyId, "done")).toHaveLength(1);
		const kept = "collect.correction join collect.response using (response_id) where survey_id = $1";
		expect(await count(owner, kept, [surveyId])).toBe(1);
	});

	test("coded again from a second window of the same person are told so", async () => {
		const { surveyId } = await lostToOther("hail and deer");
		const [row] = await rowsOf(iowa, surveyId);
		expect(await code(iowa, surveyId, row!, "cause_pests")).toBe("coded");
		expect(await code(iowa, surveyId, row!, "cause_hail_wind")).toBe("changed_by_you");
		expect(await code(other, surveyId, row!, "cause_hail_wind")).toBe("changed");
	});

	test("take no code that the form has not, and are not found from another state", async () => {
		const { surveyId } = await lostToOther("raccoons");
		await owner.query("insert into collect.survey_state values ($1, '55')", [surveyId]);
		const [row] = await rowsOf(iowa, surveyId);
		expect(row).toBeDefined();
		expect(await code(iowa, surveyId, row!, "cause_other")).toBe("not_found");
		expect(await code(iowa, surveyId, row!, "harvested")).toBe("not_found");
		expect(await rowsOf(wisconsin, surveyId)).toEqual([]);
		expect(await code(wisconsin, surveyId, row!, "cause_pests")).toBe("not_found");
	});
});

describe("a pest that the list lacks", () => {
	test("counts as seen once its words have a code, in that planting's crop", async () => {
		const operationId = await addOperation(owner, { state: "19" });
		const draft = draftOf(["19"], { formKey: "pests" });
		const surveyId = await asDesk(iowa, async (trx) => {
			const made = (await createSurvey(trx, iowa, draft)) as { surveyId: string };
			await openSurvey(trx, iowa, made.surveyId);
			return made.surveyId;
		});
		const place = { surveyId, operationId };
		const grower = growerOf(operationId);
		await beginAnswering(grower, place);
		const [seen] = await stepKeysOf(grower, place);
		await typeStep(grower, place, seen!, { seen: "other" });
		const words = (await stepKeysOf(grower, place)).find((key) => key.startsWith("other_pest"))!;
		await typeStep(grower, place, words, { other_pest: "sarna en las hojas" });
		expect(await submit(grower, place)).toMatchObject({ outcome: "submitted" });
		expect(await factOf(owner, surveyId, operationId, "scab_seen")).toMatchObject({ y: 0, x: 1 });

		const [row] = await rowsOf(iowa, surveyId);
		expect(row).toMatchObject({ words: "sarna en las hojas", cropKey: "apple", suggested: ["scab"] });
		expect(row?.choices.map(({ key }) => key)).not.toContain("nut_weevil");
		expect(await code(iowa, surveyId, row!, "scab")).toBe("coded");
		expect(await factOf(owner, surveyId, operationId, "scab_seen")).toMatchObject({ y: 1, x: 1 });
		// On how many trees was not told: asked for, and not given.
		expect(await factOf(owner, surveyId, operationId, "scab_trees")).toMatchObject({ y: null });
	});
});
