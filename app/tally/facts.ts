import type { FormDefinition, Quantity } from "#app/collect/form.ts";
import { evaluate } from "#app/lib/condition.ts";
import { Answers, type SubmittedResponse } from "./answers.ts";

export type Fact = { measureKey: string; cropKey: string; y: number; x: number };
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
	const crops = [...new Set(response.plantings.map((planting) => planting.cropKey))];
	return definition.measures.flatMap((measure) =>
		[
			...crops.filter((crop) => measure.crops?.includes(crop) ?? true),
			...(measure.acrossCrops && crops.length > 0 ? ["all"] : []),
		].flatMap((cropKey) => {
			const y = quantityOf(measure.numerator, answers, cropKey);
			const x = measure.denominator === null ? 1 : quantityOf(measure.denominator, answers, cropKey);
			return y === null || x === null ? [] : [{ measureKey: measure.key, cropKey, y, x }];
		}),
	);
}

function quantityOf(quantity: Quantity, answers: Answers, cropKey: string): number | null {
	if ("one" in quantity) return 1;
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
