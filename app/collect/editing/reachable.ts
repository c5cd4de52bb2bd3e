import {
	type Condition,
	type ConditionValue,
	comparisonsIn,
	evaluate,
	type Known,
	questionsIn,
} from "#app/lib/condition.ts";
import type { Question, Screen } from "../form.ts";
import { type FormDraft, questionsOf } from "./draft.ts";

type Placed = { question: Question; screen: Screen };
/** Answers are tried out in every combination up to here; a condition of more is taken to be reachable. */
const mostTries = 5000;

/**
 * The questions that no answers lead to, by key: every combination of answers that could make a difference is tried, with
 * what these answers themselves leave out. What waits for a question that is not there is left to who looks for that.
 */
export function unreachableQuestions(draft: Pick<FormDraft, "screens">): string[] {
	const placed = questionsOf(draft);
	const byKey = new Map(placed.map((one) => [one.question.key, one]));
	return placed.flatMap((one) => {
		const waitsFor = closureOf(one, byKey);
		if (waitsFor === undefined || waitsFor.length === 0) return [];
		return isReachable(one, waitsFor) ? [] : [one.question.key];
	});
}

/** Every question that decides about one, in the order of the form; undefined where one is missing or waits for itself. */
function closureOf(one: Placed, byKey: Map<string, Placed>): Placed[] | undefined {
	const found = new Map<string, Placed>();
	const open = namedBy(one);
	for (let key = open.pop(); key !== undefined; key = open.pop()) {
		const named = byKey.get(key);
		if (!named || key === one.question.key) return undefined;
		if (found.has(key)) continue;
		found.set(key, named);
		open.push(...namedBy(named));
	}
	return [...byKey.values()].filter(({ question }) => found.has(question.key));
}

function namedBy({ question, screen }: Placed): string[] {
	return conditionsOf({ question, screen }).flatMap(questionsIn);
}

function conditionsOf({ question, screen }: Placed): Condition[] {
	return [screen.condition, question.condition].filter((condition) => condition !== undefined);
}

function isReachable(one: Placed, waitsFor: Placed[]): boolean {
	const conditions = [...waitsFor, one].flatMap(conditionsOf);
	const values = waitsFor.map(({ question }) => valuesToTry(question, conditions));
	const tries = values.reduce((product, { length }) => product * length, 1);
	if (tries > mostTries) return true;
	for (let n = 0; n < tries; n++) {
		if (isAsked(one, answersOf(n, waitsFor, values))) return true;
	}
	return false;
}

/** The n-th combination, with the answers of what is itself not asked left out. */
function answersOf(n: number, waitsFor: Placed[], values: ConditionValue[][]): Map<string, ConditionValue> {
	const answers = new Map<string, ConditionValue>();
	let rest = n;
	for (const [index, one] of waitsFor.entries()) {
		const choices = values[index]!;
		const value = choices[rest % choices.length];
		rest = Math.floor(rest / choices.length);
		if (value !== undefined && isAsked(one, answers)) answers.set(one.question.key, value);
	}
	return answers;
}

function isAsked(one: Placed, answers: Map<string, ConditionValue>): boolean {
	const known: Known = { value: (key) => answers.get(key), rows: [(key) => answers.get(key)] };
	const holds = ({ condition, whenUnsure }: Pick<Screen, "condition" | "whenUnsure">) =>
		condition === undefined || (evaluate(condition, known) ?? whenUnsure !== "skip");
	return holds(one.screen) && holds(one.question);
}

/** Answers on each side of whatever the conditions compare a question with, as far as its limits let them be given. */
function valuesToTry(question: Question, conditions: Condition[]): ConditionValue[] {
	if (question.type === "several") return question.options.map(({ key }) => [key]);
	if ("options" in question) return question.options.map(({ key }) => key);
	const compared = conditions
		.flatMap((condition) => comparisonsIn(condition))
		.flatMap(({ of: { question: left, to } }) => (left === question.key && "value" in to ? [to.value] : []));
	if (question.type === "number" || question.type === "percent") {
		const { hardMin = -Infinity, hardMax = Infinity } = question.limits ?? {};
		const ends = [hardMin, hardMax].filter((end) => Number.isFinite(end));
		const tried = [0, 1, 100, ...ends, ...compared.flatMap((value) => aroundNumber(value))];
		return [...new Set(tried)].filter((value) => value >= hardMin && value <= hardMax);
	}
	const texts = compared.filter((value) => typeof value === "string");
	return ["2000-01-01", "2100-12-31", ...texts];
}

function aroundNumber(value: number | string): number[] {
	return typeof value === "number" ? [value - 0.5, value, value + 0.5] : [];
}
