import type { Words } from "#app/lib/words.ts";
import type { FormDefinition, Question, Screen } from "../form.ts";
import { isSame } from "./canonical.ts";
import { questionsOf } from "./draft.ts";

/** One thing in which two versions of a form differ. Its words are `forms:difference.<kind>`. */
export type FormDifference = {
	kind: DifferenceKind;
	/** What it is of: a question, a screen, a measure, by its name. */
	about: Words;
	/** A text before and after, in the language that changed, or in both where it came or went. */
	language?: "en" | "es";
	before?: string | Words;
	after?: string | Words;
};
export type DifferenceKind =
	| ("form_title" | "screen_added" | "screen_removed" | "screen_moved" | "screen_title" | "screen_help")
	| ("screen_condition" | "screen_plantings" | "screen_sum")
	| ("question_added" | "question_removed" | "question_moved" | "question_text" | "question_label" | "question_help")
	| ("question_type" | "question_unit" | "question_limits" | "question_condition" | "now_required" | "now_optional")
	| (
			| "now_sensitive"
			| "now_plain"
			| "question_settings"
			| "option_added"
			| "option_removed"
			| "option_text"
			| "options_order"
	  )
	| ("check_added" | "check_removed" | "check_changed" | "check_message")
	| ("measure_added" | "measure_removed" | "measure_name" | "measure_changed");

type Form = Pick<FormDefinition, "title" | "screens" | "measures">;

/** What became of a form, in the order of its pages: screens, their questions, then checks and measures. */
export function differencesBetween(before: Form, after: Form): FormDifference[] {
	return [
		...textDifferences("form_title", after.title, before.title, after.title),
		...screenDifferences(before.screens, after.screens),
		...questionDifferences(before, after),
		...listDifferences(checksIn(before), checksIn(after), {
			codes: ["check_added", "check_removed", "check_changed"],
			text: "check_message",
			nameOf: ({ message }) => message,
		}),
		...listDifferences(shownMeasures(before), shownMeasures(after), {
			codes: ["measure_added", "measure_removed", "measure_changed"],
			text: "measure_name",
			nameOf: ({ label }) => label,
		}),
	];
}

/** Whether two versions ask and count the same, and differ in nothing but how it is said. */
export function onlyWordingDiffers(one: FormDefinition, other: FormDefinition): boolean {
	return isSame(withoutWords(one), withoutWords(other));
}

const saidOnly = new Set(["text", "label", "help", "title", "message", "description", "minutes"]);

function withoutWords(value: unknown): unknown {
	if (Array.isArray(value)) return value.map(withoutWords);
	if (typeof value !== "object" || value === null) return value;
	const kept = Object.entries(value).filter(([key]) => !saidOnly.has(key));
	return Object.fromEntries(kept.map(([key, inner]) => [key, withoutWords(inner)]));
}

function* screenDifferences(before: Screen[], after: Screen[]): Generator<FormDifference> {
	const old = byKey(before);
	for (const screen of after) {
		const was = old.get(screen.key);
		const about = screen.title;
		if (!was) {
			yield { kind: "screen_added", about };
			continue;
		}
		yield* textDifferences("screen_title", about, was.title, screen.title);
		yield* textDifferences("screen_help", about, was.help, screen.help);
		if (!isSame([was.condition, was.whenUnsure], [screen.condition, screen.whenUnsure]))
			yield { kind: "screen_condition", about };
		if (was.perPlanting !== screen.perPlanting) yield { kind: "screen_plantings", about };
		if (!isSame(was.sumToHundred, screen.sumToHundred)) yield { kind: "screen_sum", about };
	}
	for (const { title } of before.filter(({ key }) => !byKey(after).has(key)))
		yield { kind: "screen_removed", about: title };
	for (const { title } of movedAmong(before, after)) yield { kind: "screen_moved", about: title };
}

function* questionDifferences(before: Form, after: Form): Generator<FormDifference> {
	const [olds, news] = [questionsOf(before), questionsOf(after)];
	const old = new Map(olds.map((one) => [one.question.key, one]));
	for (const { question, screen } of news) {
		const was = old.get(question.key);
		if (!was) yield { kind: "question_added", about: nameOf(question) };
		else {
			if (was.screen.key !== screen.key) yield { kind: "question_moved", about: nameOf(question) };
			yield* oneQuestion(was.question, question);
		}
	}
	const kept = new Set(news.map(({ question }) => question.key));
	for (const { question } of olds.filter((one) => !kept.has(one.question.key)))
		yield { kind: "question_removed", about: nameOf(question) };
	for (const screen of after.screens) {
		const was = before.screens.find(({ key }) => key === screen.key);
		for (const question of movedAmong(was?.questions ?? [], screen.questions))
			yield { kind: "question_moved", about: nameOf(question) };
	}
}

function* oneQuestion(was: Question, now: Question): Generator<FormDifference> {
	const about = nameOf(now);
	yield* textDifferences("question_text", about, was.text, now.text);
	yield* textDifferences("question_label", about, was.label, now.label);
	yield* textDifferences("question_help", about, was.help, now.help);
	if (was.type !== now.type) {
		yield { kind: "question_type", about };
		return;
	}
	if (was.required !== now.required) yield { kind: now.required ? "now_required" : "now_optional", about };
	if (was.sensitive !== now.sensitive) yield { kind: now.sensitive ? "now_sensitive" : "now_plain", about };
	if (!isSame([was.condition, was.whenUnsure], [now.condition, now.whenUnsure]))
		yield { kind: "question_condition", about };
	if (!isSame(partOf(was, "unitFamily"), partOf(now, "unitFamily"))) yield { kind: "question_unit", about };
	if (!isSame(partOf(was, "limits"), partOf(now, "limits"))) yield { kind: "question_limits", about };
	const rest = ["prefill", "notBefore", "maxLength"];
	if (
		!isSame(
			rest.map((part) => partOf(was, part)),
			rest.map((part) => partOf(now, part)),
		)
	)
		// one sentence for all three
		yield { kind: "question_settings", about };
	if ("options" in was && "options" in now) yield* optionDifferences(was.options, now.options, about);
}

type Option = { key: string; text: Words };

function* optionDifferences(was: Option[], now: Option[], about: Words): Generator<FormDifference> {
	const [old, kept] = [byKey(was), byKey(now)];
	for (const option of now) {
		const before = old.get(option.key);
		if (!before) yield { kind: "option_added", about, after: option.text };
		else yield* textDifferences("option_text", about, before.text, option.text);
	}
	for (const { text } of was.filter(({ key }) => !kept.has(key))) yield { kind: "option_removed", about, before: text };
	const bones = (options: Option[]) => options.filter(({ key }) => old.has(key) && kept.has(key)).map(withoutWords);
	if (!isSame(bones(was), bones(now))) yield { kind: "options_order", about };
}

type Fate = "added" | "removed" | "changed";
type Listed<T> = {
	codes: [
		`${string}_added` & DifferenceKind,
		`${string}_removed` & DifferenceKind,
		`${string}_changed` & DifferenceKind,
	];
	text: DifferenceKind;
	nameOf: (one: T) => Words;
};

function* listDifferences<T extends { key: string }>(was: T[], now: T[], listed: Listed<T>): Generator<FormDifference> {
	const { codes, text, nameOf: named } = listed;
	const [old, kept] = [byKey(was), byKey(now)];
	const kindOf = (fate: Fate) => codes[(["added", "removed", "changed"] as const).indexOf(fate)]!;
	for (const one of now) {
		const before = old.get(one.key);
		if (!before) yield { kind: kindOf("added"), about: named(one) };
		else {
			yield* textDifferences(text, named(one), named(before), named(one));
			if (!isSame(withoutWords(before), withoutWords(one))) yield { kind: kindOf("changed"), about: named(one) };
		}
	}
	for (const one of was.filter(({ key }) => !kept.has(key))) yield { kind: kindOf("removed"), about: named(one) };
}

function* textDifferences(
	kind: DifferenceKind,
	about: Words,
	was: Words | undefined,
	now: Words | undefined,
): Generator<FormDifference> {
	for (const language of ["en", "es"] as const) {
		const [before, after] = [was?.[language] ?? "", now?.[language] ?? ""];
		if (before !== after) yield { kind, about, language, before, after };
	}
}

/** Of the things that both lists have, the fewest whose moving makes one order of the other. */
function movedAmong<T extends { key: string }>(was: T[], now: T[]): T[] {
	const kept = now.filter(({ key }) => byKey(was).has(key));
	const places = kept.map(({ key }) => was.findIndex((one) => one.key === key));
	const stays = longestRising(places);
	return kept.filter((_, index) => !stays.has(index));
}

/** The indices of a longest rising run; the lists are of a page's length, so each is compared with all before it. */
function longestRising(places: number[]): Set<number> {
	const length = places.map(() => 1);
	const from = places.map(() => -1);
	for (let i = 0; i < places.length; i++) {
		for (let j = 0; j < i; j++) {
			if (places[j]! < places[i]! && length[j]! + 1 > length[i]!) {
				length[i] = length[j]! + 1;
				from[i] = j;
			}
		}
	}
	const rising = new Set<number>();
	for (let i = length.indexOf(Math.max(...length)); i >= 0; i = from[i]!) rising.add(i);
	return rising;
}

function checksIn({ screens }: Form) {
	return screens.flatMap((screen) => screen.checks ?? []);
}

/** Base quantities are estimated for protection and come with the measures that are made of them. */
function shownMeasures({ measures }: Form) {
	return measures.filter(({ base }) => !base);
}

function byKey<T extends { key: string }>(list: T[]): Map<string, T> {
	return new Map(list.map((one) => [one.key, one]));
}

function partOf(question: Question, part: string): unknown {
	return (question as Record<string, unknown>)[part];
}

function nameOf({ label, text }: Question): Words {
	return label ?? text;
}
