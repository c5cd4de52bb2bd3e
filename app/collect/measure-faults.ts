import { comparisonsIn, type Condition, questionsOf } from "#app/lib/condition.ts";
import { conditionFaults, type Fault, isNumber, type Placed } from "./condition-faults.ts";
import type { Measure, Quantity, Share, Term } from "./form.ts";

type Path = (string | number)[];

/** What would make a measure count wrongly: what is no number, shares that weigh nothing, a base that nobody finds. */
export function* measureFaults(measure: Measure, path: Path, byKey: Map<string, Placed>): Generator<Fault> {
	const what = `measure "${measure.key}"`;
	if (measure.base !== measure.key.startsWith("base."))
		yield { path, message: `${what} is a base quantity if and only if its key begins with "base."` };
	if (measure.base && measure.kind !== "total") yield { path, message: `${what} is a base quantity, and no total` };
	if ((measure.kind === "total") !== (measure.denominator === null))
		yield { path, message: `${what} needs a denominator if and only if it is no total` };
	if (measure.crops && measure.acrossCrops)
		yield { path, message: `${what} is told of some crops, and cannot be told of all together` };
	if ((measure.kind === "day") !== "day" in measure.numerator || (measure.denominator && "day" in measure.denominator))
		yield {
			path,
			message: `${what} takes a day of the year if and only if it is one of days, and then as its numerator`,
		};
	if (measure.kind === "day" && !(measure.denominator && "one" in measure.denominator))
		yield { path, message: `${what} is one of days, and has another denominator than one` };
	for (const part of ["numerator", "denominator"] as const) {
		const quantity = measure[part];
		if (quantity) yield* quantityFaults(quantity, what, [...path, part], byKey);
	}
}

function* quantityFaults(quantity: Quantity, what: string, path: Path, byKey: Map<string, Placed>): Generator<Fault> {
	if ("one" in quantity) return;
	if ("day" in quantity) {
		if (byKey.get(quantity.day)?.question.type !== "date")
			yield { path, message: `${what} takes its day from "${quantity.day}", which is no date question` };
	} else if ("indicator" in quantity) yield* indicatorFaults(quantity.indicator, what, path, byKey);
	else for (const term of quantity.terms) yield* termFaults(term, what, path, byKey);
}

function* indicatorFaults(
	condition: Condition,
	what: string,
	path: Path,
	byKey: Map<string, Placed>,
): Generator<Fault> {
	// Seen over the plantings of a crop: outside any_planting a number stands for its sum.
	const asked = { what: `the indicator of ${what}`, before: Infinity, perPlanting: true };
	yield* conditionFaults(condition, asked, path, byKey);
	for (const { of: comparison, inRows } of comparisonsIn(condition)) {
		for (const key of questionsOf(comparison)) {
			const named = byKey.get(key);
			if (named?.screen.perPlanting && !inRows && !isNumber(named.question))
				yield { path, message: `${what} cannot sum "${key}": put it into any_planting` };
		}
	}
}

function* termFaults(term: Term, what: string, path: Path, byKey: Map<string, Placed>): Generator<Fault> {
	if ("question" in term) yield* numberFaults(term.question, what, path, byKey);
	const { share } = term;
	if (share === undefined) return;
	if (typeof share === "string") {
		const named = byKey.get(share)?.question;
		if (!named) yield { path, message: `${what} names no question "${share}"` };
		else if (named.type !== "percent" && !(named.type === "rating" && named.options[0]?.score !== undefined))
			yield { path, message: `"${share}" of ${what} is no percent and no score` };
	} else {
		for (const key of [share.part, share.whole]) yield* numberFaults(key, what, path, byKey);
	}
	const weighed = "known" in term || byKey.get(term.question)?.screen.perPlanting;
	if (!weighed && keysOf(share).some((key) => byKey.get(key)?.screen.perPlanting))
		yield { path, message: `${what} weighs what is asked once by what each planting has` };
}

function* numberFaults(key: string, what: string, path: Path, byKey: Map<string, Placed>): Generator<Fault> {
	const named = byKey.get(key);
	if (!named) yield { path, message: `${what} names no question "${key}"` };
	else if (!isNumber(named.question)) yield { path, message: `${what} cannot sum "${key}", which is no number` };
}

function keysOf(share: Share): string[] {
	return typeof share === "string" ? [share] : [share.part, share.whole];
}
