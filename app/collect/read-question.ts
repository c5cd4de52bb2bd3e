import { typedDay } from "#app/lib/typed-moment.ts";
import type { Answer, Question } from "./form.ts";
import { postedChoices, postedText, type StepValues } from "./posted.ts";
import { readNumber } from "./read-number.ts";
import { cleanText, lengthOf } from "./typed-text.ts";

export type ReadSettings = { language: "en" | "es"; season: number; today: string };
/** An answer, null where nothing was said, or what is to be mended. */
export type Reading = { answer: Pick<Answer, "kind" | "value" | "given"> | null } | ToMend;
/** `box` names the box beside the question's own that is to be mended. */
export type ToMend = { code: string; detail?: Record<string, string | number>; box?: "crate" };
type OptionQuestion = Extract<Question, { type: "choice" | "rating" | "several" }>;

/** No box takes more; what is longer is refused before anything looks into it. */
const longestBox = 10_000;

/** Reads what was posted for one question: a value, "don't know" or "would rather not say", of which only one can be. */
export function readQuestion(
	question: Question,
	bushelLb: number | null,
	values: StepValues,
	settings: ReadSettings,
): Reading {
	switch (question.type) {
		case "choice":
		case "rating":
		case "several":
			return readOptions(question, values);
		case "photo":
			return { answer: null };
		default: {
			const typed = postedText(values, question.key);
			if (typed.length > longestBox) return tooLong(question);
			const text = cleanText(typed);
			const kind = readKind(values, `${question.key}_kind`, text !== "");
			if (kind !== null) return kind;
			if (text === "") return blank(question);
			return readText(question, text, bushelLb, values, settings);
		}
	}
}

/** Reads a pair of ticks. @returns null when none is ticked. */
export function readKind(values: StepValues, name: string, typed: boolean): Reading | null {
	const kinds = postedChoices(values, name);
	const [kind] = kinds;
	if (kind === undefined) return null;
	if (!kinds.every((ticked) => ticked === "dont_know" || ticked === "refused")) return { code: "choice_wrong" };
	if (kinds.length > 1 || typed) return { code: "value_and_unknown" };
	return silence(kind as "dont_know" | "refused");
}

function silence(kind: "dont_know" | "refused"): Reading {
	return { answer: { kind, value: null, given: null } };
}

function blank(question: Question): Reading {
	return question.required ? { code: "empty" } : { answer: null };
}

function tooLong(question: Question): Reading {
	const hasMost = question.type === "short_text" || question.type === "long_text";
	return hasMost ? { code: "too_long_limit", detail: { max: question.maxLength } } : { code: "too_long" };
}

function readText(
	question: Exclude<Question, OptionQuestion | { type: "photo" }>,
	text: string,
	bushelLb: number | null,
	values: StepValues,
	settings: ReadSettings,
): Reading {
	switch (question.type) {
		case "number":
		case "percent":
			return readNumber(question, text, bushelLb, values, settings.language);
		case "date":
			return readDate(text, settings);
		case "short_text":
		case "long_text":
			if (lengthOf(text) > question.maxLength) return tooLong(question);
			return { answer: { kind: "given", value: text, given: null } };
	}
}

/** A day of the season's year that is not still to come. Days of ISO 8601 compare as texts. */
function readDate(text: string, { season, today }: ReadSettings): Reading {
	const moment = typedDay.test(text) ? Date.parse(`${text}T00:00:00Z`) : Number.NaN;
	if (Number.isNaN(moment) || new Date(moment).toISOString().slice(0, 10) !== text) return { code: "date_wrong" };
	if (text.slice(0, 4) !== String(season)) return { code: "date_outside_season" };
	if (text > today) return { code: "date_in_future" };
	return { answer: { kind: "given", value: text, given: null } };
}

/** The two silences stand in the list of options, so that one tap answers. */
function readOptions(question: OptionQuestion, values: StepValues): Reading {
	const chosen = postedChoices(values, question.key);
	const silences = chosen.filter((key) => key === "_dont_know" || key === "_refused");
	const options = question.options.map(({ key }) => key).filter((key) => chosen.includes(key));
	if (silences.length + options.length < chosen.length) return { code: "choice_wrong" };
	if (silences.length > 1 || (silences.length === 1 && options.length > 0)) return { code: "value_and_unknown" };
	if (silences.length === 1) return silence(silences[0] === "_refused" ? "refused" : "dont_know");
	const [first] = options;
	if (first === undefined) return blank(question);
	if (question.type === "several" && options.length > 1) {
		const alone = question.options.some(({ key, alone: isAlone }) => isAlone && options.includes(key));
		if (alone) return { code: "none_and_some" };
	}
	if (question.type === "several") return { answer: { kind: "given", value: options, given: null } };
	// A radio group sends one value; two of them come from no page of ours.
	return options.length > 1 ? { code: "choice_wrong" } : { answer: { kind: "given", value: first, given: null } };
}
