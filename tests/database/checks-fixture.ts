import type { Client } from "pg";
import type { Associate } from "#app/auth/viewer.ts";
import { checkAnswers } from "#app/jobs/check-answers.server.ts";
import { addSurvey, beginAnswering, growerOf, pounds, submit, typeStep } from "./answering-fixture.ts";
import { addOperation } from "./surveys-fixture.ts";

/** One grower's apples: plants, a normal crop and what was picked, in pounds. */
export type Picked = { trees: number; normal: number; picked: number; name?: string; email?: string | null };

/** Nine orchards of forty trees that fared alike, and a tenth. */
export const orchards = (tenth: Picked): Picked[] => [
	...[0, 1, 2, 3, 4, 5, 6, 7, 8].map((i) => ({ trees: 40, normal: 4000 + 40 * i, picked: 3000 + 70 * i })),
	tenth,
];

/** The same a season earlier, a little more here and a little less there. */
export const aSeasonEarlier = (told: readonly Picked[]): Picked[] =>
	told.map((one, i) => {
		const change = 1 + 0.02 * (((i * 7) % 5) - 2);
		return { ...one, normal: Math.round(one.normal * change), picked: Math.round(one.picked * change) };
	});

export async function addOrchards(owner: Client, told: readonly Picked[]) {
	await owner.query("update directory.operation set status = 'left'");
	const operations: { operationId: string; plantingId: string }[] = [];
	for (const { trees, name, email } of told) {
		const operationId = await addOperation(owner, { state: "19", trees, name, ...(email !== undefined && { email }) });
		const { rows } = await owner.query("select planting_id from directory.planting where operation_id = $1", [
			operationId,
		]);
		operations.push({ operationId, plantingId: rows[0].planting_id as string });
	}
	return operations;
}

/** Asks these operations in a season and has each of them answer. */
export async function answerAll(
	associate: Associate,
	operations: { operationId: string; plantingId: string }[],
	told: readonly Picked[],
	season: number,
): Promise<string> {
	const surveyId = await addSurvey(associate, true, season);
	for (const [at, { operationId, plantingId }] of operations.entries())
		await answer({ surveyId, operationId }, plantingId, told[at]!);
	return surveyId;
}

/** Answers, or amends what was answered. */
export async function answer(place: { surveyId: string; operationId: string }, plantingId: string, told: Picked) {
	const grower = growerOf(place.operationId);
	await beginAnswering(grower, place);
	await typeStep(grower, place, `planting-${plantingId}`, pounds(told.trees, told.normal, told.picked));
	const sent = await submit(grower, place);
	if (typeof sent === "string" || !("receiptCode" in sent)) throw new Error(`not sent in: ${JSON.stringify(sent)}`);
}

/** What the queued work does. */
export const check = (surveyId: string) => checkAnswers({ surveyId, responseId: null });

export type FindingRow = {
	edit_finding_id: string;
	check_kind: string;
	check_key: string;
	question_key: string;
	outcome: string | null;
	version: number;
	effect: number | null;
	told: { why: string };
	about: { value: unknown }[];
};

/** As owner: every finding about one operation in a survey, oldest first. */
export async function findingsOf(owner: Client, surveyId: string, operationId: string): Promise<FindingRow[]> {
	const { rows } = await owner.query<FindingRow>(
		`select f.* from collect.edit_finding f join collect.response r using (response_id)
		where r.survey_id = $1 and r.operation_id = $2 order by f.made_at, f.check_key`,
		[surveyId, operationId],
	);
	return rows;
}

/** As owner: an operation's y and x of a measure, and whether it is set aside. */
export async function factOf(owner: Client, surveyId: string, operationId: string, measureKey: string) {
	const { rows } = await owner.query(
		`select y, x, set_aside as "setAside" from collect.fact
		where survey_id = $1 and operation_id = $2 and measure_key = $3 and crop_key = 'apple'`,
		[surveyId, operationId, measureKey],
	);
	return rows[0] as { y: number; x: number; setAside: boolean } | undefined;
}

/** Nine orchards that fared alike and a tenth with an odd crop, gone through; the tenth's findings wait. */
export async function oddSurvey(owner: Client, associate: Associate, tenth: Partial<Picked> = {}) {
	const now = orchards({ trees: 40, normal: 40_000, picked: 30_000, ...tenth });
	const operations = await addOrchards(owner, now);
	const surveyId = await answerAll(associate, operations, now, 2031);
	await check(surveyId);
	const { operationId, plantingId } = operations[9]!;
	const findings = await findingsOf(owner, surveyId, operationId);
	const findingOf = (question: string) => findings.find(({ question_key }) => question_key === question)!;
	return { surveyId, operationId, plantingId, operations, findings, findingOf };
}
