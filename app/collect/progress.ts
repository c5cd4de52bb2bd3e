import { listOpenChecks } from "./checks.ts";
import type { Answer, FormDefinition } from "./form.ts";
import { sumTolerance } from "./step-fields.ts";
import {
	type AskedStep,
	type Asking,
	answersByPlace,
	listAsked,
	placeOf,
	type PlantingAsked,
	type Step,
} from "./steps.ts";

/** Where to go on: the first step without any answer, or with one to finish or to look at again, if there is any. */
export function findOpenStep(
	definition: FormDefinition,
	plantings: PlantingAsked[],
	answers: Answer[],
): Step | undefined {
	const toCheck = new Set(listOpenChecks({ definition, plantings, answers }).map(({ step }) => step.key));
	return listAsked(definition, plantings, answers).find(
		(asked) => answersOf(asked, answers).length === 0 || !isFinished(asked, answers) || toCheck.has(asked.step.key),
	)?.step;
}

/** Why answers cannot be sent in yet: steps to finish, or with odd answers to look at again, in the order of the form. */
export type Hindrance = { outcome: "unfinished" | "to_check"; stepKeys: string[] };

export function findHindrance(asking: Asking): Hindrance | undefined {
	const { definition, plantings, answers } = asking;
	const unfinished = listAsked(definition, plantings, answers).filter((asked) => !isFinished(asked, answers));
	if (unfinished.length > 0) return { outcome: "unfinished", stepKeys: unfinished.map(({ step }) => step.key) };
	const toCheck = new Set(listOpenChecks(asking).map(({ step }) => step.key));
	return toCheck.size > 0 ? { outcome: "to_check", stepKeys: [...toCheck] } : undefined;
}

/**
 * Whether a step's answers can be sent in. Kept as they are typed, they may still lack a required one, have shares that do
 * not make a hundred, or days in the wrong order.
 */
export function isFinished(asked: AskedStep, answers: Answer[]): boolean {
	const given = new Map(answersOf(asked, answers).map((answer) => [answer.questionKey, answer]));
	const { questions, step } = asked;
	if (questions.some(({ key, required }) => required && !given.has(key))) return false;
	const shares = questions
		.filter(({ key }) => step.screen.sumToHundred?.includes(key))
		.map(({ key }) => given.get(key));
	if (shares.some((share) => share !== undefined) && !makeHundred(shares)) return false;
	return questions.every((question) => {
		if (question.type !== "date" || question.notBefore === undefined) return true;
		const [from, day] = [given.get(question.notBefore)?.value, given.get(question.key)?.value];
		return typeof from !== "string" || typeof day !== "string" || day >= from;
	});
}

/** Shares are all there, and either none is told or they make a hundred. */
function makeHundred(shares: (Answer | undefined)[]): boolean {
	if (shares.some((share) => share === undefined)) return false;
	const told = shares.flatMap((share) => (typeof share?.value === "number" ? share.value : []));
	return told.length === 0 || Math.abs(told.reduce((sum, share) => sum + share, 0) - 100) <= sumTolerance;
}

function answersOf({ step, questions }: AskedStep, answers: Answer[]): Answer[] {
	const byPlace = answersByPlace(answers);
	return questions.flatMap(({ key }) => byPlace.get(placeOf(key, step.planting?.plantingId ?? null)) ?? []);
}
