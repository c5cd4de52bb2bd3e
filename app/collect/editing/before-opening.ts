import { type Condition, comparisonsIn, questionsOf as questionsOfComparison } from "#app/lib/condition.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import type { Words } from "#app/lib/words.ts";
import { type FormDefinition, FormDefinition as Definition, type Question, type Screen } from "../form.ts";
import { faultsOf } from "../form-faults.ts";
import { definitionOfDraft, type FormDraft, findQuestion, mostQuestions, questionsOf } from "./draft.ts";
import { keepsAnswers } from "./edit-questions.ts";
import type { Held } from "./edit-screens.ts";
import { mostMinutes } from "./minutes.ts";
import { unreachableQuestions } from "./reachable.ts";

/** What is to be mended before a form is asked, or to be thought about. Its words are `forms:finding.<kind>`. */
export type Finding = {
	kind: FindingKind;
	/** Whether it keeps a version from being published. */
	blocks: boolean;
	/** Where it is mended; of the whole form where neither is told. */
	screenKey?: string;
	questionKey?: string;
	measureKey?: string;
	/** What the sentence speaks of beside its place: another question, a measure, a number. */
	about?: Words;
	count?: number;
	language?: "en" | "es";
};
export type FindingKind =
	| ("no_question" | "no_measure" | "too_many" | "too_long" | "untranslated" | "screen_empty")
	| ("condition_gone" | "condition_later" | "condition_wrong" | "unreachable" | "no_figure")
	| ("options_few" | "options_wrong" | "limits_crossed" | "check_wrong" | "sum_wrong" | "order_wrong" | "photo_wrong")
	| ("key_twice" | "codes_wrong" | "measure_wrong" | "answered_gone" | "answered_changed");

/**
 * Everything that stands between a draft and a version, and what an associate should know of it. With nothing that blocks,
 * the draft's definition is a form.
 * @param held questions that growers have answered, with the newest version that asked them.
 */
export function findingsOf(draft: FormDraft, held: Held, published?: FormDefinition): Finding[] {
	const told = [...wholeFindings(draft), ...draft.screens.flatMap((screen) => [...screenFindings(draft, screen)])];
	const faults = [...faultFindings(draft)].filter((fault) => !isToldBetter(fault, told));
	const found = [...told, ...faults, ...heldFindings(draft, held, published)];
	const seen = new Set<string>();
	return found.filter((finding) => {
		const key = JSON.stringify(finding);
		return !seen.has(key) && seen.add(key);
	});
}

/** The form that a draft makes, or undefined while something blocks it. */
export function finishedForm(draft: FormDraft, held: Held, published?: FormDefinition): FormDefinition | undefined {
	if (findingsOf(draft, held, published).some(({ blocks }) => blocks)) return undefined;
	return Definition.parse(definitionOfDraft(draft));
}

function* wholeFindings(draft: FormDraft): Generator<Finding> {
	const { minutes, measures } = definitionOfDraft(draft);
	const { length } = questionsOf(draft);
	yield* untranslated(draft.title, {});
	if (length === 0) yield { kind: "no_question", blocks: true };
	else if (measures.length === 0) yield { kind: "no_measure", blocks: true };
	if (length > mostQuestions) yield { kind: "too_many", blocks: true, count: mostQuestions };
	if (minutes > mostMinutes) yield { kind: "too_long", blocks: false, count: minutes };
	// A measure that is called as its question is needs no translation of its own.
	const called = measures.filter(({ key }) => draft.names[key] || draft.measures.some((own) => own.key === key));
	for (const { key, label } of called) yield* untranslated(label, { measureKey: key }, label);
	for (const questionKey of unreachableQuestions(draft)) yield { kind: "unreachable", blocks: true, questionKey };
	const named = new Set(measures.flatMap(questionsOfMeasure));
	for (const { question } of questionsOf(draft)) {
		const isToRead = question.type === "short_text" || question.type === "long_text" || question.type === "photo";
		if (!isToRead && !named.has(question.key)) yield { kind: "no_figure", blocks: false, questionKey: question.key };
	}
}

function* screenFindings(draft: FormDraft, screen: Screen): Generator<Finding> {
	const at = { screenKey: screen.key };
	yield* untranslated(screen.title, at);
	if (screen.help) yield* untranslated(screen.help, at);
	if (screen.questions.length === 0) yield { kind: "screen_empty", blocks: true, ...at };
	if (screen.condition) yield* conditionFindings(draft, screen.condition, at, screen.questions[0]?.key);
	for (const check of screen.checks ?? []) {
		yield* untranslated(check.message, at, check.message);
		yield* goneFindings(draft, check.when, at);
	}
	for (const question of screen.questions) yield* questionFindings(draft, question);
}

function* questionFindings(draft: FormDraft, question: Question): Generator<Finding> {
	const at = { questionKey: question.key };
	for (const words of [question.text, question.label, question.help]) if (words) yield* untranslated(words, at);
	if ("options" in question) {
		for (const { text } of question.options) yield* untranslated(text, at);
		if (question.options.length < 2) yield { kind: "options_few", blocks: true, ...at };
	}
	if ("limits" in question && areCrossed(question.limits)) yield { kind: "limits_crossed", blocks: true, ...at };
	if (question.condition) yield* conditionFindings(draft, question.condition, at, question.key);
}

/** Whether limits leave nothing between them, or ask about what cannot be answered. */
export function areCrossed(limits: { hardMin?: number; hardMax?: number; softMin?: number; softMax?: number } = {}) {
	const { hardMin = -Infinity, hardMax = Infinity, softMin = hardMin, softMax = hardMax } = limits;
	return hardMin > hardMax || softMin > softMax || softMin < hardMin || softMax > hardMax;
}

type Place = Pick<Finding, "screenKey" | "questionKey" | "measureKey">;

function* untranslated(words: Words, at: Place, about?: Words): Generator<Finding> {
	for (const language of ["en", "es"] as const) {
		if (words[language].trim() === "")
			yield { kind: "untranslated", blocks: true, language, ...at, ...(about && { about }) };
	}
}

/** @param before the first question that a condition must not wait for. */
function* conditionFindings(
	draft: FormDraft,
	condition: Condition,
	at: Place,
	before: string | undefined,
): Generator<Finding> {
	yield* goneFindings(draft, condition, at);
	const order = questionsOf(draft).map(({ question }) => question);
	const first = before === undefined ? order.length : order.findIndex(({ key }) => key === before);
	for (const key of namedIn(condition)) {
		const place = order.findIndex((question) => question.key === key);
		if (place >= first) yield { kind: "condition_later", blocks: true, ...at, about: order[place]!.text };
	}
}

function* goneFindings(draft: FormDraft, condition: Condition, at: Place): Generator<Finding> {
	for (const key of namedIn(condition)) {
		if (!findQuestion(draft, key)) yield { kind: "condition_gone", blocks: true, ...at };
	}
}

function namedIn(condition: Condition): string[] {
	return [...new Set(comparisonsIn(condition).flatMap(({ of }) => questionsOfComparison(of)))];
}

/** A condition that waits for what is gone or comes later is a fault for that very reason: once is enough. */
function isToldBetter({ kind, screenKey, questionKey }: Finding, told: Finding[]): boolean {
	if (kind !== "condition_wrong" && kind !== "check_wrong") return false;
	const inPlace = told.filter((one) => one.screenKey === screenKey && one.questionKey === questionKey);
	return inPlace.some((one) => one.kind === "condition_gone" || one.kind === "condition_later");
}

/** The faults that would make a form ask or count wrongly. */
function* faultFindings(draft: FormDraft): Generator<Finding> {
	for (const { path } of faultsOf(definitionOfDraft(draft))) {
		const [part, index, inner, innerIndex] = path;
		if (part === "measures") {
			const about = definitionOfDraft(draft).measures[Number(index)]?.label;
			yield { kind: "measure_wrong", blocks: true, ...(about && { about }) };
			continue;
		}
		const screen = typeof index === "number" ? draft.screens[index] : undefined;
		const question = inner === "questions" ? screen?.questions[Number(innerIndex)] : undefined;
		const at: Place = question ? { questionKey: question.key } : screen ? { screenKey: screen.key } : {};
		yield { kind: kindOfFault(path, draft), blocks: true, ...at };
	}
}

function kindOfFault(path: (string | number)[], draft: FormDraft): FindingKind {
	if (path.includes("checks")) return "check_wrong";
	if (path.includes("condition")) return "condition_wrong";
	if (path.includes("options")) return "options_wrong";
	if (path.includes("sumToHundred")) return "sum_wrong";
	if (path.includes("notBefore")) return "order_wrong";
	if (path.includes("codes")) return "codes_wrong";
	if (path.at(-1) === "key") return "key_twice";
	const asksPhotos = questionsOf(draft).some(({ question }) => question.type === "photo");
	return asksPhotos ? "photo_wrong" : "key_twice";
}

/** What growers answered must stay, whoever took it away and however. */
function* heldFindings(draft: FormDraft, held: Held, published: FormDefinition | undefined): Generator<Finding> {
	if (!published) return;
	for (const { question, screen } of questionsOf(published).filter((one) => held.has(one.question.key))) {
		const now = findQuestion(draft, question.key);
		if (!now) yield { kind: "answered_gone", blocks: true, about: question.text };
		else if (!keepsAnswers(question, now.question) || now.screen.perPlanting !== screen.perPlanting)
			yield { kind: "answered_changed", blocks: true, questionKey: question.key };
	}
}
