import type { Measure, Quantity, Term } from "#app/collect/form.ts";
import { questionsIn } from "#app/lib/condition.ts";

/** The questions whose answers a measure is made of, each once. */
export function questionsOfMeasure({ numerator, denominator }: Pick<Measure, "numerator" | "denominator">): string[] {
	return [...new Set([...questionsOfQuantity(numerator), ...(denominator ? questionsOfQuantity(denominator) : [])])];
}

function questionsOfQuantity(quantity: Quantity): string[] {
	if ("one" in quantity) return [];
	if ("day" in quantity) return [quantity.day];
	if ("indicator" in quantity) return questionsIn(quantity.indicator);
	return quantity.terms.flatMap(questionsOfTerm);
}

function questionsOfTerm(term: Term): string[] {
	const { share } = term;
	const shares = share === undefined ? [] : typeof share === "string" ? [share] : [share.part, share.whole];
	return "question" in term ? [term.question, ...shares] : shares;
}
