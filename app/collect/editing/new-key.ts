import { quantityOf } from "../base-quantities.ts";
import type { FormDraft } from "./draft.ts";
import { questionsOf } from "./draft.ts";

const wordsInAKey = 4;
const longest = 40;

/**
 * A key made from words that are there, as somebody would abbreviate them: "How many trees froze?" is how_many_trees_froze.
 * A key that is taken, or could be the beginning of one, gets a number.
 */
export function newKey(words: string, taken: Iterable<string>, otherwise: string): string {
	const plain = words
		.normalize("NFD")
		.replaceAll(/\p{M}/gu, "")
		.toLowerCase()
		.replaceAll(/[^a-z0-9]+/g, " ")
		.trim();
	const slug = plain
		.split(" ")
		.slice(0, wordsInAKey)
		.join("_")
		.slice(0, longest)
		.replaceAll(/^[^a-z]+|_+$/g, "");
	const held = [...taken];
	// Under a name that begins like another, no number would make the two differ.
	const isEnding = held.some((one) => slug.startsWith(`${one}_`));
	const base = (isEnding ? slug.replaceAll("_", "") : slug) || otherwise;
	// Fields and measures are named for a question, with an ending: "trees_unit" must not be a question beside "trees".
	const isFree = (key: string) =>
		!held.some((one) => one === key || one.startsWith(`${key}_`) || key.startsWith(`${one}_`));
	for (let n = 1; ; n++) {
		const key = n === 1 ? base : `${base}${n}`;
		if (isFree(key)) return key;
	}
}

/** A key for a question; measures are named for questions too. */
export function newQuestionKey(draft: FormDraft, words: string): string {
	const questions = questionsOf(draft).map(({ question }) => question.key);
	const measures = draft.measures.map(({ key }) => quantityOf(key));
	return newKey(words, ["screen", "confirm", "bearing", ...questions, ...measures], "question");
}

export function newScreenKey(draft: FormDraft, words: string): string {
	// "planting-…" is how the steps of a planting table are called.
	return newKey(words, ["planting", ...draft.screens.map(({ key }) => key)], "screen");
}

export function newCheckKey(draft: FormDraft, words: string): string {
	const checks = draft.screens.flatMap((screen) => screen.checks ?? []).map(({ key }) => key);
	const questions = questionsOf(draft).map(({ question }) => question.key);
	return newKey(words, ["confirm", ...checks, ...questions], "check");
}

/** The key of a whole form: letters and lines only. */
export function newFormKey(words: string, taken: Iterable<string>): string {
	const held = new Set(taken);
	const base =
		newKey(words, [], "form").replaceAll(/\d+/g, "").replaceAll(/_+/g, "_").replaceAll(/^_|_$/g, "") || "form";
	for (let n = 0; ; n++) {
		const key = n === 0 ? base : `${base}_${lettersOf(n)}`;
		if (!held.has(key)) return key;
	}
}

/** 1 is b, 25 is z, 26 is ba: the second of a name is its "b". */
function lettersOf(n: number): string {
	const letter = String.fromCharCode(97 + (n % 26));
	return n < 26 ? letter : lettersOf(Math.floor(n / 26)) + letter;
}
