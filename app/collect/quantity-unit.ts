import type { FormDefinition, Measure, Quantity, Term } from "./form.ts";

/** What answers of a number question are kept in, as figures name it. */
export const unitOfFamily = {
	mass: "lb",
	area: "acres",
	temperature: "fahrenheit",
	length: "row_feet",
	trees: "trees",
	count: "count",
} as const;

/** In what sums of a quantity over operations are told; `count` where it is no unit that has a name. */
export function unitOfQuantity(quantity: Quantity, { screens }: Pick<FormDefinition, "screens">): Measure["unit"] {
	if (!("terms" in quantity)) return "operations";
	const questions = new Map(screens.flatMap((screen) => screen.questions).map((question) => [question.key, question]));
	const unitOfTerm = (term: Term): Measure["unit"] => {
		if (Math.abs(term.times) !== 1) return "count";
		if ("known" in term) return "trees";
		const question = questions.get(term.question);
		return question?.type === "number" ? unitOfFamily[question.unitFamily] : "count";
	};
	const [first = "count", ...others] = new Set(quantity.terms.map(unitOfTerm));
	return others.length === 0 ? first : "count";
}
