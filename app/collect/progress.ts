import type { Answer, FormDefinition } from "./form.ts";
import { listSteps, type PlantingAsked, questionsAsked, type Step } from "./steps.ts";

/** Where to go on: the first step without any answer. @returns undefined when each has one. */
export function findOpenStep(
	definition: FormDefinition,
	plantings: PlantingAsked[],
	answers: Answer[],
): Step | undefined {
	return listSteps(definition, plantings, answers).find((step) => {
		const asked = new Set(questionsAsked(step, definition, plantings, answers).map(({ key }) => key));
		return !answers.some(
			(answer) => asked.has(answer.questionKey) && answer.plantingId === (step.planting?.plantingId ?? null),
		);
	});
}
