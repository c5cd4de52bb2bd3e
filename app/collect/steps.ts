import { evaluate, type Known } from "#app/lib/condition.ts";
import type { Answer, FormDefinition, Question, Screen } from "./form.ts";

export type PlantingAsked = {
	plantingId: string;
	cropKey: string;
	cultivar: string;
	bearingTrees: number;
	plantKind: "tree" | "bush";
	/** Pounds in a bushel of the crop, null where the trade sells by weight only. */
	bushelLb: number | null;
};

/** One screen as a grower meets it. `key` is `planting-<plantingId>` for the planting table, else the screen's key. */
export type Step = { key: string; screen: Screen; planting: PlantingAsked | null };
export type AskedStep = { step: Step; questions: Question[] };
/** A form for one operation, with what has been answered so far. */
export type Asking = { definition: FormDefinition; plantings: PlantingAsked[]; answers: Answer[] };

/**
 * The steps that are asked, given the answers so far. What a condition rules out is left out; where the answers do not
 * decide it yet, it stays, unless the form says to skip it then. A planting table takes one step a planting, and none where there is no planting.
 */
export function listSteps(definition: FormDefinition, plantings: PlantingAsked[], answers: Answer[]): Step[] {
	return listAsked(definition, plantings, answers).map(({ step }) => step);
}

/** The questions of a step that are asked given the answers. */
export function questionsAsked(
	step: Step,
	definition: FormDefinition,
	plantings: PlantingAsked[],
	answers: Answer[],
): Question[] {
	return listAsked(definition, plantings, answers).find((asked) => asked.step.key === step.key)?.questions ?? [];
}

/** Answers that a submission keeps: those of questions that are asked now, in the order of the form. */
export function keptAnswers(definition: FormDefinition, plantings: PlantingAsked[], answers: Answer[]): Answer[] {
	const byPlace = answersByPlace(answers);
	return listAsked(definition, plantings, answers).flatMap(({ step, questions }) =>
		questions.flatMap(({ key }) => byPlace.get(placeOf(key, step.planting?.plantingId ?? null)) ?? []),
	);
}

/**
 * Steps with their questions, in the order of the form. A condition sees no answer of a question that is itself left out,
 * so that what follows from a hidden answer is decided as if it had not been given: it will not be submitted either.
 */
export function listAsked(definition: FormDefinition, plantings: PlantingAsked[], answers: Answer[]): AskedStep[] {
	const seen = answersByPlace(answers);
	const value = (key: string, plantingId: string | null) => seen.get(placeOf(key, plantingId))?.value;
	const known = (planting: PlantingAsked | null): Known => ({
		value: (key) => (planting && value(key, planting.plantingId)) ?? value(key, null),
		rows: plantings.map((row) => (key: string) => value(key, row.plantingId)),
	});
	return listAllSteps(definition, plantings).flatMap((step) => {
		const asks = ({ condition, whenUnsure }: Pick<Screen, "condition" | "whenUnsure">) =>
			condition === undefined || (evaluate(condition, known(step.planting)) ?? whenUnsure !== "skip");
		const wholeScreen = asks(step.screen);
		const questions = step.screen.questions.filter((question) => {
			if (wholeScreen && asks(question)) return true;
			seen.delete(placeOf(question.key, step.planting?.plantingId ?? null));
			return false;
		});
		return questions.length > 0 ? [{ step, questions }] : [];
	});
}

/** Every step of a form, whether asked now or not. */
export function listAllSteps(definition: FormDefinition, plantings: PlantingAsked[]): Step[] {
	const table = definition.screens.find((screen) => screen.perPlanting);
	return definition.screens.flatMap((screen): Step[] => {
		if (!screen.perPlanting) return [{ key: screen.key, screen, planting: null }];
		// A second table of one form needs keys of its own.
		const prefix = screen === table ? "planting" : screen.key;
		return plantings.flatMap((planting): Step[] => {
			const questions = screen.questions.flatMap((question) => askedOf(question, planting.cropKey));
			if (questions.length === 0) return [];
			return [{ key: `${prefix}-${planting.plantingId}`, screen: { ...screen, questions }, planting }];
		});
	});
}

/** A question with the options that are offered for a crop; without any, there is nothing to ask. */
function askedOf(question: Question, cropKey: string): Question[] {
	if (question.type !== "several") return [question];
	const options = question.options.filter(({ crops }) => crops === undefined || crops.includes(cropKey));
	return options.every(({ alone }) => alone) ? [] : [{ ...question, options }];
}

/** A step with the questions that are asked of it now; with all of them where it is not asked. */
export function findStep({ definition, plantings, answers }: Asking, stepKey: string): AskedStep | undefined {
	const isThis = ({ key }: { key: string }) => key === stepKey;
	const asked = listAsked(definition, plantings, answers).find(({ step }) => isThis(step));
	if (asked) return asked;
	const step = listAllSteps(definition, plantings).find(isThis);
	return step && { step, questions: step.screen.questions };
}

/** Names the one answer that a question can have for a planting, or for the whole operation. */
export function placeOf(questionKey: string, plantingId: string | null): string {
	return `${questionKey} ${plantingId ?? ""}`;
}

export function answersByPlace(answers: Answer[]): Map<string, Answer> {
	return new Map(answers.map((answer) => [placeOf(answer.questionKey, answer.plantingId), answer]));
}
