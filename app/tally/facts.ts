import type { FormDefinition, Measure, Quantity } from "#app/collect/form.ts";
import { evaluate } from "#app/lib/condition.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import { Answers, type SubmittedResponse } from "./answers.ts";

export type Fact = { measureKey: string; cropKey: string; y: number; x: number };
export type Unanswered = Pick<Fact, "measureKey" | "cropKey">;
export type { SubmittedResponse };

/**
 * The facts of one submitted response: y and x of each measure for each crop of the operation, its plantings of the crop
 * summed first, and for "all" crops together where the measure says that this sum means something. Indicators are
 * evaluated on the sums, so a proportion over "all" counts the operation once.
 *
 * No fact is made where an answer it needs is missing, not known or refused: zero is an answer, silence is not. A cause
 * that was not asked since its condition does not hold took nothing (0), and so did one left blank beside others that
 * add up to the whole hundred.
 * @param response `plantings` are those that were asked about; answers are canonical (pounds, trees, percent).
 * @returns y and x in the canonical units of the measure's questions; x is 1 for totals and where the denominator is one.
 */
export function factsOf(definition: FormDefinition, response: SubmittedResponse): Fact[] {
	const answers = new Answers(definition, response);
	return listCells(definition, response).flatMap(({ measure, cropKey }) => {
		const figures = figuresOf(measure, answers, cropKey);
		return figures ? [{ measureKey: measure.key, cropKey, ...figures }] : [];
	});
}

/**
 * The measures and crops to which an operation was asked and gave no fact: a question that the measure needs was not known,
 * refused or left blank. What was not asked, since its condition does not hold, is not among them. A condition that an
 * answer not given leaves open counts as asked: what hangs on it is not known either.
 */
export function unansweredOf(definition: FormDefinition, response: SubmittedResponse): Unanswered[] {
	const answers = new Answers(definition, response);
	return listCells(definition, response)
		.filter(({ measure, cropKey }) => !figuresOf(measure, answers, cropKey))
		.filter(({ measure, cropKey }) => questionsOfMeasure(measure).some((key) => answers.isMissing(key, cropKey)))
		.map(({ measure, cropKey }) => ({ measureKey: measure.key, cropKey }));
}

/** What a response can be asked for: each measure, for each crop that it is told of and the operation has. */
function listCells({ measures }: FormDefinition, response: SubmittedResponse): { measure: Measure; cropKey: string }[] {
	const crops = [...new Set(response.plantings.map((planting) => planting.cropKey))];
	return measures.flatMap((measure) =>
		[
			...crops.filter((crop) => measure.crops?.includes(crop) ?? true),
			...(measure.acrossCrops && crops.length > 0 ? ["all"] : []),
		].map((cropKey) => ({ measure, cropKey })),
	);
}

function figuresOf(measure: Measure, answers: Answers, cropKey: string): { y: number; x: number } | null {
	const y = quantityOf(measure.numerator, answers, cropKey);
	const x = measure.denominator === null ? 1 : quantityOf(measure.denominator, answers, cropKey);
	return y === null || x === null ? null : { y, x };
}

function quantityOf(quantity: Quantity, answers: Answers, cropKey: string): number | null {
	if ("one" in quantity) return 1;
	if ("day" in quantity) return answers.dayOf(quantity.day, quantity.take ?? "earliest", cropKey);
	if ("indicator" in quantity) {
		const holds = evaluate(quantity.indicator, answers.summed(cropKey));
		return holds === null ? null : Number(holds);
	}
	let sum = 0;
	for (const term of quantity.terms) {
		const value = answers.termOf(term, cropKey);
		if (value === null) return null;
		sum += value;
	}
	return quantity.atLeast === undefined ? sum : Math.max(quantity.atLeast, sum);
}
