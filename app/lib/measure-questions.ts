import { type Condition, questionsIn } from "./condition.ts";

type Share = string | { part: string; whole: string };
type Term = ({ question: string } | { known: string }) & { share?: Share };
type Quantity = { terms: Term[] } | { indicator: Condition } | { one: true } | { day: string };

/** The questions whose answers a measure is made of, each once. */
export function questionsOfMeasure(measure: { numerator: Quantity; denominator: Quantity | null }): string[] {
	const { numerator, denominator } = measure;
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
