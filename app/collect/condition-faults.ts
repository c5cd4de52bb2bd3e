import { type Comparison, comparisonsIn, type Condition, questionsIn, questionsOf } from "#app/lib/condition.ts";
import type { Question, Screen } from "./form.ts";

/** What is wrong with a form beyond the shape of its parts, for whoever writes one. */
export type Fault = { path: (string | number)[]; message: string };
/** A question with its place among all questions of its form. */
export type Placed = { question: Question; screen: Screen; at: number; path: (string | number)[] };
export type AskedAt = {
	what: string;
	/** Position of the first question that is too late. */ before: number;
	perPlanting: boolean;
};

/** What keeps a condition from being decided: unknown and later questions, and values that no answer can have. */
export function* conditionFaults(
	condition: Condition,
	asked: AskedAt,
	path: (string | number)[],
	byKey: Map<string, Placed>,
): Generator<Fault> {
	const fault = (message: string): Fault => ({ path: [...path, "condition"], message: `${asked.what} ${message}` });
	for (const { of: comparison, inRows } of comparisonsIn(condition)) {
		for (const key of questionsOf(comparison)) {
			const named = byKey.get(key);
			if (!named) yield fault(`names no question "${key}"`);
			else if (named.at >= asked.before) yield fault(lateness(named, asked.before, byKey));
			else if (named.screen.perPlanting && !inRows && !asked.perPlanting)
				yield fault(`asks "${key}" of no planting: put it into any_planting`);
		}
		for (const message of comparisonFaults(comparison, byKey)) yield fault(message);
	}
}

/** Why a question that comes later cannot decide: conditions may even wait for each other. */
function lateness(named: Placed, before: number, byKey: Map<string, Placed>): string {
	const { key } = named.question;
	if (named.at === before) return `waits for "${key}" itself`;
	const waits = [...byKey.values()].find(({ at }) => at === before)?.question.key;
	const round = waits !== undefined && waitsFor(key, byKey).has(waits);
	return round ? `waits for "${key}", which waits for "${waits}"` : `waits for "${key}", which is asked later`;
}

/** Every question that a question waits for, straight or by way of others. */
function waitsFor(key: string, byKey: Map<string, Placed>, seen = new Set<string>()): Set<string> {
	const { question, screen } = byKey.get(key) ?? {};
	const next = [question?.condition, screen?.condition].flatMap((condition) =>
		condition ? questionsIn(condition) : [],
	);
	for (const one of next) {
		if (seen.has(one)) continue;
		seen.add(one);
		waitsFor(one, byKey, seen);
	}
	return seen;
}

function* comparisonFaults({ question, to }: Comparison, byKey: Map<string, Placed>): Generator<string> {
	const left = byKey.get(question)?.question;
	if (!left) return;
	if ("question" in to) {
		const right = byKey.get(to.question)?.question;
		if (right && isNumber(left) !== isNumber(right)) yield `compares "${question}" with "${to.question}"`;
		else if (to.times !== undefined && !isNumber(left)) yield `multiplies "${to.question}", which is no number`;
	} else if ("options" in left) {
		if (!left.options.some(({ key }) => key === to.value)) yield `asks for "${to.value}", no option of "${question}"`;
	} else if (isNumber(left) !== (typeof to.value === "number")) {
		yield `compares "${question}" with ${JSON.stringify(to.value)}`;
	}
}

export function isNumber({ type }: Question): boolean {
	return type === "number" || type === "percent";
}
