import type { Problem } from "#app/lib/parse-form.ts";
import { answersOutside, listRaisedChecks, type RaisedCheck, withConfirmations } from "./checks.ts";
import type { Answer, Question } from "./form.ts";
import { postedTexts, type StepValues } from "./posted.ts";
import type { ReadSettings } from "./read-question.ts";
import { readStep } from "./step-fields.ts";
import { type Asking, listAsked, questionsAsked, type Step } from "./steps.ts";

/** `questions` are those that the posted answers leave asked; with a problem, nothing is to be kept. */
export type PostedStep = { step: Step; questions: Question[]; answers: Answer[]; problems: Problem[] };

/**
 * Reads what was posted for a step, with the conditions among its own questions decided by what was posted: a question
 * that an answer of the same screen rules out may stand empty or odd. Hard checks give problems like any other; soft ones
 * are confirmed where the field `confirm` names them, several with spaces between.
 * @param asking the form with what has been answered so far.
 * @returns undefined for a step that is not asked.
 */
export function readPostedStep(
	asking: Asking,
	stepKey: string,
	values: StepValues,
	settings: ReadSettings,
): PostedStep | undefined {
	const { definition, plantings, answers } = asking;
	const steps = listAsked(definition, plantings, answers);
	const step = steps.find((asked) => asked.step.key === stepKey)?.step;
	if (!step) return undefined;
	const others = answersOutside(step, answers);
	const read = readStep(step, questionsAsked(step, definition, plantings, others), values, settings);
	const questions = questionsAsked(step, definition, plantings, [...others, ...read.answers]);
	const fields = new Set(questions.flatMap(({ key }) => [key, `${key}_crate`]));
	const problems = read.ok ? [] : read.problems.filter(({ field }) => fields.has(field));
	if (problems.length > 0) return { step, questions, answers: read.answers, problems };

	const next = { ...asking, answers: [...others, ...read.answers] };
	const broken = listRaisedChecks(next).filter((check) => check.step.key === step.key && check.kind === "hard");
	const confirmed = new Set(postedTexts(values, "confirm").flatMap((keys) => keys.split(" ")));
	return {
		step,
		questions,
		answers: withConfirmations(step, asking, read.answers, confirmed),
		problems: broken.map(problemOf),
	};
}

/** A hard check as a problem of the field beside which it stands, in the form's own words. */
export function problemOf({ key, question, message }: RaisedCheck): Problem {
	return { field: question.key, code: key, words: typeof message === "string" ? undefined : message };
}
