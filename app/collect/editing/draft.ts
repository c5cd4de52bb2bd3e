import type { Words } from "#app/lib/words.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import { defaultMeasures, withDefaultMeasures } from "../default-measures.ts";
import type { FormDefinition, Measure, Question, Screen } from "../form.ts";
import { isSame } from "./canonical.ts";
import { estimateMinutes } from "./minutes.ts";

/**
 * A form while it is being written: the same parts as a finished one, but texts may be empty in a language, screens without
 * questions, and conditions may wait for what is not there. `measures` are those that were written by hand, as the ready
 * forms' are; questions that none of them names get their own when the form is finished, called as `names` says.
 */
export type FormDraft = Pick<FormDefinition, "key" | "title" | "screens" | "measures"> & {
	names: Record<string, Words>;
};

/** More than growers would ever answer, and few enough that every page of the desk stays quick. */
export const mostQuestions = 200;
export const longestText = 500;

export function blankDraft(key: string, title: Words): FormDraft {
	return { key, title, screens: [], measures: [], names: {} };
}

/**
 * A finished form opened for writing. Measures that a question has by default are left to it again, so that they follow what
 * becomes of the question; only the names that somebody gave them are kept.
 */
export function draftOfDefinition(definition: FormDefinition): FormDraft {
	const { key, title, screens } = definition;
	const names: Record<string, Words> = {};
	const dropped = new Set<string>();
	for (const { question, screen } of questionsOf(definition)) {
		const own = new Map(defaultMeasures(question, screen).map((measure) => [measure.key, measure]));
		const naming = definition.measures.filter((measure) => questionsOfMeasure(measure).includes(question.key));
		if (naming.length === 0 || !naming.every((measure) => isDefault(measure, own.get(measure.key)))) continue;
		for (const measure of naming) {
			dropped.add(measure.key);
			if (!isSame(measure.label, own.get(measure.key)?.label)) names[measure.key] = measure.label;
		}
	}
	const measures = definition.measures.filter((measure) => !dropped.has(measure.key));
	// Trees that the directory knows come with whichever measure weighs by them.
	const idle =
		measures.every(({ base }) => base) && measures.every((measure) => questionsOfMeasure(measure).length === 0);
	return { key, title, screens, measures: idle ? [] : measures, names };
}

function isDefault(measure: Measure, own: Measure | undefined): boolean {
	if (!own) return false;
	const { label, description } = own;
	return isSame({ ...measure, label, description }, own);
}

/** The form that a draft would make, whole or not: it has yet to be checked. Its minutes are estimated from its questions. */
export function definitionOfDraft(draft: FormDraft): FormDefinition {
	const { key, title, screens, names } = draft;
	const form = { key, title, minutes: estimateMinutes(screens), screens, measures: draft.measures };
	const whole = withDefaultMeasures(form);
	const named = (measure: Measure): Measure => ({ ...measure, label: names[measure.key] ?? measure.label });
	return { ...whole, measures: whole.measures.map(named) };
}

/** Every question with the screen that asks it, in the order of the form. */
export function questionsOf({ screens }: Pick<FormDraft, "screens">): { question: Question; screen: Screen }[] {
	return screens.flatMap((screen) => screen.questions.map((question) => ({ question, screen })));
}

export function findQuestion(draft: Pick<FormDraft, "screens">, key: string) {
	return questionsOf(draft).find(({ question }) => question.key === key);
}

export function findScreen({ screens }: Pick<FormDraft, "screens">, key: string): Screen | undefined {
	return screens.find((screen) => screen.key === key);
}
