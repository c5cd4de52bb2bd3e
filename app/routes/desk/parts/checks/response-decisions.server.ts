import type { Trx } from "#app/auth/scope.server.ts";
import { findNewestSubmission } from "#app/collect/answer-rows.server.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { codedQuestionsOf, codesOf } from "#app/review/coding.ts";
import { listCorrections } from "#app/review/corrections.server.ts";
import { holds, keyOf } from "#app/review/reviewed-answers.ts";
import { plantingsById, showAnswer } from "./queue.server.ts";

/** What review put in the place of a response's answers and counts now. The caller has found the response. */
export async function listResponseDecisions(trx: Trx, surveyId: string, responseId: string) {
	const definition = await findSurveyForm(trx, surveyId);
	const submission = await findNewestSubmission(trx, responseId, "counted");
	if (!definition || !submission) return [];
	const own = new Map(submission.answers.map((answer) => [keyOf(answer), answer]));
	const corrections = (await listCorrections(trx, responseId)).filter(
		(one) => one.act !== "own" && holds(one, own.get(keyOf(one))),
	);
	const plantings = await plantingsById(trx, [{ about: submission.answers }]);
	const coded = codedQuestionsOf(definition);
	return corrections.flatMap(
		({ questionKey, plantingId, act, answer, number, madeBy, madeAt, reason, editFindingId }) => {
			const place = { questionKey, plantingId };
			const told = showAnswer(definition, own.get(keyOf(place))!, plantings);
			if (!told) return [];
			const question = coded.find(({ key }) => key === questionKey);
			const cropKey = plantings.get(plantingId ?? "")?.cropKey ?? null;
			const choices = question ? codesOf(definition, question, cropKey) : [];
			const keys = answer && "codes" in answer ? answer.codes : [];
			const put = answer && "kind" in answer ? showAnswer(definition, { ...place, ...answer }, plantings) : undefined;
			return [
				{
					number,
					madeBy,
					madeAt,
					reason,
					act,
					told,
					put: put ?? null,
					findingId: editFindingId,
					codes: choices.filter(({ key }) => keys.includes(key)).map(({ text }) => text),
				},
			];
		},
	);
}
export type ResponseDecision = Awaited<ReturnType<typeof listResponseDecisions>>[number];
