import type { Problem } from "#app/lib/parse-form.ts";
import { type ShownAnswer, shownAs } from "./answer-lines.ts";
import { type CheckMessage, listRaisedChecks, type RaisedCheck } from "./checks.ts";
import type { Answer, Question, Words } from "./form.ts";
import { readPostedStep } from "./posted-step.ts";
import { postedText, postedTexts, type StepValues } from "./posted.ts";
import type { ReadSettings } from "./read-question.ts";
import { screenKind } from "./step-fields.ts";
import { type ShowSettings, valuesOf } from "./step-values.ts";
import { answersByPlace, type Asking, listAllSteps, placeOf, type Step } from "./steps.ts";

/*
 * A whole form on one page, for an associate who types in what was told by telephone or stands on paper. Every step's fields
 * have the names they have on the grower's own screen, behind the step's key and a point: `next_year.comment`. In a box a
 * question mark says "don't know" and an x "would rather not say", so that no key but Tab leads from box to box.
 */
type Form = Pick<Asking, "definition" | "plantings">;
const signs = { dont_know: "?", refused: "x" } as const;

export function entryName(stepKey: string, field: string): string {
	return `${stepKey}.${field}`;
}

/** A soft check that the answers raise: `id` names it with the values that are odd, so that others are asked about anew. */
export type EntryCheck = {
	id: string;
	stepKey: string;
	about: { label: Words; shown: ShownAnswer }[];
	message: CheckMessage;
};
export type ReadEntry = {
	/** Of the questions that are asked, as far as they could be read. */
	answers: Answer[];
	problems: Problem[];
	/** What is to be asked once more before it is sent in. */
	checks: EntryCheck[];
};

/**
 * Reads a whole form. Steps are read in their order, each asked or not by what the earlier ones say, as a grower meets
 * them; what was typed for a step or question that is not asked stays out. Photos come from the grower's own phone alone.
 * Soft checks are confirmed by their ids in the field `confirm`.
 */
export function readEntry({ definition, plantings }: Form, typed: StepValues, settings: ReadSettings): ReadEntry {
	const answers: Answer[] = [];
	const problems: Problem[] = [];
	for (const step of listAllSteps(definition, plantings)) {
		const values = valuesOfStep(step, typed);
		const posted = readPostedStep({ definition, plantings, answers }, step.key, values, settings);
		if (!posted) continue;
		answers.push(...posted.answers);
		problems.push(...posted.problems.map((problem) => ({ ...problem, field: entryName(step.key, problem.field) })));
	}
	const confirmed = new Set(postedTexts(typed, "confirm"));
	const raised = listRaisedChecks({ definition, plantings, answers }).filter(({ kind }) => kind === "soft");
	const agreed = raised.filter((check) => confirmed.has(idOf(check)));
	const open = raised.filter((check) => !confirmed.has(idOf(check)));
	return {
		answers: answers.map((answer) => withChecks(answer, agreed)),
		problems,
		checks: open.map((check) => toldCheck(check, answers)),
	};
}

/** What the boxes of the whole form hold: answers that were sent in, else what is already known. */
export function entryValues({ definition, plantings }: Form, answers: Answer[], settings: ShowSettings): StepValues {
	const all: StepValues = {};
	for (const step of listAllSteps(definition, plantings)) {
		const values = valuesOf(step, step.screen.questions, answers, settings);
		const shares = new Set(step.screen.sumToHundred ?? []);
		for (const { key } of step.screen.questions.filter(hasBox)) {
			const kind = postedText(values, shares.has(key) ? screenKind : `${key}_kind`);
			if (kind === "dont_know" || kind === "refused") values[key] = signs[kind];
		}
		for (const [field, value] of Object.entries(values)) all[entryName(step.key, field)] = value;
	}
	return all;
}

/** What is typed into as text. A day has a field of its own kind, with a choice beside it. */
export function hasBox({ type }: Question): boolean {
	return type === "number" || type === "percent" || type === "short_text" || type === "long_text";
}

function valuesOfStep(step: Step, typed: StepValues): StepValues {
	const start = entryName(step.key, "");
	const own = Object.entries(typed).filter(([name]) => name.startsWith(start));
	const values: StepValues = Object.fromEntries(own.map(([name, value]) => [name.slice(start.length), value]));
	const shares = new Set(step.screen.sumToHundred ?? []);
	for (const question of step.screen.questions.filter(hasBox)) {
		const kind = kindOf(postedText(values, question.key));
		if (kind === null) continue;
		values[question.key] = "";
		// Shares that make a hundred are known or not all together.
		values[shares.has(question.key) ? screenKind : `${question.key}_kind`] = kind;
	}
	return values;
}

function kindOf(text: string): keyof typeof signs | null {
	const sign = text.trim().toLowerCase();
	return sign === signs.dont_know ? "dont_know" : sign === signs.refused ? "refused" : null;
}

function idOf({ key, step, values }: RaisedCheck): string {
	return `${step.key} ${key} ${JSON.stringify(values)}`;
}

function withChecks(answer: Answer, agreed: RaisedCheck[]): Answer {
	const own = agreed.filter(
		({ question, step }) =>
			question.key === answer.questionKey && (step.planting?.plantingId ?? null) === answer.plantingId,
	);
	if (own.length === 0) return answer;
	return { ...answer, confirmed: own.map(({ key, values }) => ({ check: key, values })) };
}

function toldCheck(check: RaisedCheck, answers: Answer[]): EntryCheck {
	const byPlace = answersByPlace(answers);
	const { planting } = check.step;
	return {
		id: idOf(check),
		stepKey: check.step.key,
		message: check.message,
		about: check.about.map((question) => ({
			label: question.label ?? question.text,
			shown: shownAs(question, byPlace.get(placeOf(question.key, planting?.plantingId ?? null)), planting),
		})),
	};
}
