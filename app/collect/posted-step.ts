import type { Problem } from "#app/lib/parse-form.ts";
import type { Answer, Question } from "./form.ts";
import type { StepValues } from "./posted.ts";
import type { ReadSettings } from "./read-question.ts";
import { readStep } from "./step-fields.ts";
import { type Asking, listAsked, questionsAsked, type Step } from "./steps.ts";

/** `questions` are those that the posted answers leave asked; with a problem, nothing is to be kept. */
export type PostedStep = { step: Step; questions: Question[]; answers: Answer[]; problems: Problem[] };

/**
 * Reads what was posted for a step, with the conditions among its own questions decided by what was posted: a question
 * that an answer of the same screen rules out may stand empty or odd.
 * @param asking the form with what has been answered so far.
 * @returns undefined for a step that is not asked.
 */
export function readPostedStep(
	{ definition, plantings, answers }: Asking,
	stepKey: string,
	values: StepValues,
	settings: ReadSettings,
): PostedStep | undefined {
	const steps = listAsked(definition, plantings, answers);
	const step = steps.find((asked) => asked.step.key === stepKey)?.step;
	if (!step) return undefined;
	const plantingId = step.planting?.plantingId ?? null;
	const own = new Set(step.screen.questions.map(({ key }) => key));
	const others = answers.filter((answer) => answer.plantingId !== plantingId || !own.has(answer.questionKey));
	const read = readStep(step, questionsAsked(step, definition, plantings, others), values, settings);
	const questions = questionsAsked(step, definition, plantings, [...others, ...read.answers]);
	const fields = new Set(questions.flatMap(({ key }) => [key, `${key}_crate`]));
	const problems = read.ok ? [] : read.problems.filter(({ field }) => fields.has(field));
	return { step, questions, answers: read.answers, problems };
}
