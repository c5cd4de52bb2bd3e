import { z } from "zod";
import type { Comparison, Condition } from "#app/lib/condition.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { typedDay } from "#app/lib/typed-moment.ts";
import type { Question, Screen } from "../form.ts";
import { parsePlainNumber, writeNumber } from "../typed-number.ts";
import { type FormDraft, findQuestion, questionsOf } from "./draft.ts";

export const comparisons = ["=", "!=", "<", "<=", ">", ">="] as const;
export const mostLines = 5;
const boxed = z.string().max(100, "too_long").optional();

/** One comparison as its fields hold it; without a question it says nothing. `answer` is `question:option`. */
const Line = z.object({
	question: boxed,
	compare: z.enum(comparisons, { error: "choice_wrong" }).catch("="),
	value: boxed,
	answer: z.string().max(200, "too_long").optional(),
	other: boxed,
	times: boxed,
});
export type Line = z.infer<typeof Line>;

export const ConditionLines = z.object({
	/** Set where the condition is one that lines cannot say, and is to stay as it is. */
	keep: z.boolean().optional(),
	join: z.enum(["all", "any"]).catch("all"),
	unsure: z.enum(["ask", "skip"]).catch("ask"),
	lines: z.array(Line).max(mostLines).default([]),
});
export type ConditionLines = z.infer<typeof ConditionLines>;

/** Where a condition stands: what its lines may name, and whether it is asked of each planting. */
export type Standing = { offered: Question[]; perPlanting: boolean; draft: FormDraft };
type Read = { condition: Condition | undefined; problems: Problem[] };

/** The questions asked before one, which its condition may wait for. */
export function questionsBefore(draft: FormDraft, key: string): Question[] {
	const all = questionsOf(draft).map(({ question }) => question);
	const at = all.findIndex((question) => question.key === key);
	return all.slice(0, Math.max(at, 0)).filter(({ type }) => isComparable(type));
}

/** Texts are not compared, nor are photos. */
export function isComparable(type: Question["type"]): boolean {
	return type !== "short_text" && type !== "long_text" && type !== "photo";
}

/** The questions asked before a screen; for its checks, with those of the screen itself. */
export function questionsUpTo(draft: FormDraft, screen: Screen, withOwn: boolean): Question[] {
	const at = draft.screens.indexOf(screen);
	const asked = draft.screens.slice(0, withOwn ? at + 1 : at).flatMap(({ questions }) => questions);
	return asked.filter(({ type }) => isComparable(type));
}

/**
 * Reads lines as a condition. What a line compares belongs to what its question asks: an answer to choose, a day, a number, or
 * another question's. Of a planting's question, asked outside the planting table, one planting is enough.
 * @param name of the fields, for the problems.
 */
export function readCondition(lines: ConditionLines, standing: Standing, name: string, language: string): Read {
	const problems: Problem[] = [];
	const read = lines.lines.flatMap((line, index): Condition[] => {
		if (!line.question) return [];
		const one = readLine({ ...line, question: line.question }, standing, language);
		if ("condition" in one) return [one.condition];
		problems.push({ ...one, field: `${name}.lines[${index}].${one.field}` });
		return [];
	});
	const [first] = read;
	if (problems.length > 0 || !first) return { condition: undefined, problems };
	if (read.length === 1) return { condition: first, problems };
	return { condition: lines.join === "any" ? { any: read } : { all: read }, problems };
}

function readLine(
	line: Line & { question: string },
	standing: Standing,
	language: string,
): { condition: Condition } | Problem {
	const question = standing.offered.find(({ key }) => key === line.question);
	if (!question) return { field: "question", code: "condition_place" };
	const to = readRight(line, question, standing, language);
	if ("code" in to) return to;
	// Options have no order, so what is not "is" can only be "is not".
	const compare = "options" in question && line.compare !== "=" ? "!=" : line.compare;
	const comparison: Comparison = { compare, question: question.key, to };
	const named = findQuestion(standing.draft, question.key);
	const ofRow = named?.screen.perPlanting && !standing.perPlanting;
	return { condition: ofRow ? { any_planting: comparison } : comparison };
}

function readRight(line: Line, question: Question, standing: Standing, language: string): Comparison["to"] | Problem {
	if ("options" in question) {
		const [of, option] = (line.answer ?? "").split(":");
		if (of !== question.key || !question.options.some(({ key }) => key === option))
			return { field: "answer", code: "condition_answer" };
		return { value: option! };
	}
	const typed = line.value?.trim() ?? "";
	if (line.other && typed !== "") return { field: "value", code: "condition_both" };
	if (line.other) return readOther(line, question, standing, language);
	if (typed === "") return { field: "value", code: "condition_value" };
	if (question.type === "date") {
		const isDay = typedDay.test(typed) && !Number.isNaN(Date.parse(typed));
		return isDay ? { value: typed } : { field: "value", code: "date_wrong" };
	}
	const unit = question.type === "percent" ? "percent" : undefined;
	const number = parsePlainNumber(typed, language, { belowZero: true, unit });
	return number.ok ? { value: number.value } : { field: "value", code: "not_a_number" };
}

function readOther(
	line: Line,
	question: Question,
	{ offered }: Standing,
	language: string,
): Comparison["to"] | Problem {
	const other = offered.find(({ key }) => key === line.other);
	const alike = other && (other.type === "date") === (question.type === "date") && !("options" in other);
	if (!alike) return { field: "other", code: "condition_unlike" };
	const typed = line.times?.trim() ?? "";
	if (typed === "") return { question: other.key };
	const times = parsePlainNumber(typed, language);
	if (!times.ok || times.value <= 0) return { field: "times", code: "not_nothing" };
	return { question: other.key, times: times.value };
}

/** A condition as lines, or undefined where it says more than lines can. */
export function linesOf(condition: Condition | undefined): Pick<ConditionLines, "join" | "lines"> | undefined {
	if (!condition) return { join: "all", lines: [] };
	const join = "any" in condition ? "any" : "all";
	const parts = "any" in condition ? condition.any : "all" in condition ? condition.all : [condition];
	const lines = parts.map(lineOf);
	if (lines.length > mostLines || lines.includes(undefined)) return undefined;
	return { join, lines: lines.filter((line) => line !== undefined) };
}

function lineOf(condition: Condition): Line | undefined {
	const inner = "any_planting" in condition ? condition.any_planting : condition;
	if (!("compare" in inner)) return undefined;
	const { question, compare, to } = inner;
	if ("question" in to)
		return { question, compare, other: to.question, ...(to.times !== undefined && { times: writeNumber(to.times) }) };
	if (typeof to.value === "number") return { question, compare, value: writeNumber(to.value) };
	return { question, compare, value: to.value, answer: `${question}:${to.value}` };
}
