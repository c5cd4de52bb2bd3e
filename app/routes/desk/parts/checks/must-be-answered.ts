import type { Question } from "#app/collect/form.ts";

/** A question as a correction asks it: blank is no correction, also where the grower could have left it blank. */
export function mustBeAnswered(question: Question): Question {
	return question.type === "photo" ? question : { ...question, required: true, help: undefined };
}
