import { expect, test } from "vitest";
import { readyForms } from "../forms/ready-forms.ts";
import { differencesBetween, onlyWordingDiffers } from "./difference.ts";
import { definitionOfDraft, draftOfDefinition, type FormDraft } from "./draft.ts";
import { moveQuestion, removeQuestion, replaceQuestion } from "./edit-questions.ts";
import { moveScreen, removeCheck } from "./edit-screens.ts";

const before = draftOfDefinition(readyForms.bloom_watch);
const nobody = new Set<string>();
const change = (made: FormDraft | string) => {
	if (typeof made === "string") throw new Error(made);
	return differencesBetween(definitionOfDraft(before), definitionOfDraft(made));
};
const codes = (made: FormDraft | string) => change(made).map(({ kind }) => kind);
const bloom = before.screens[0]!.questions.find(({ key }) => key === "first_bloom")!;
const density = before.screens[0]!.questions.find(({ key }) => key === "bloom_density")!;

test("two like forms do not differ", () => {
	expect(codes(before)).toEqual([]);
});

test("a mended text is told in its language with both wordings, and is wording alone", () => {
	const text = { ...bloom.text, es: "¿Qué día abrió la primera flor?" };
	const mended = replaceQuestion(before, { ...bloom, text }, nobody) as FormDraft;
	expect(change(mended)).toEqual([
		{ kind: "question_text", about: bloom.label, language: "es", before: bloom.text.es, after: text.es },
	]);
	expect(onlyWordingDiffers(definitionOfDraft(before), definitionOfDraft(mended))).toBe(true);
});

test("a help that is new is wording too; a condition, a limit, an answer more are not", () => {
	const differs = (made: FormDraft | string) =>
		!onlyWordingDiffers(definitionOfDraft(before), definitionOfDraft(made as FormDraft));
	expect(differs(replaceQuestion(before, { ...bloom, help: { en: "Any.", es: "Una." } }, nobody))).toBe(false);
	const when = { compare: "=", question: "bloom_density", to: { value: "none" } } as const;
	const conditional = replaceQuestion(before, { ...bloom, condition: when }, nobody);
	expect(differs(conditional)).toBe(true);
	expect(codes(conditional)).toEqual(["question_condition"]);
	expect(codes(replaceQuestion(before, { ...density, required: false }, nobody))).toEqual(["now_optional"]);
	expect(codes(removeCheck(before, before.screens[0]!.key, "full_bloom_at_once"))).toEqual(["check_removed"]);
	if (density.type !== "rating") throw new Error(density.type);
	const more = [...density.options, { key: "twice", text: { en: "Twice", es: "Doble" }, score: 0 }];
	const added = change(replaceQuestion(before, { ...density, options: more }, nobody));
	// In both languages: whoever reads it reads one of them.
	expect(added).toContainEqual(expect.objectContaining({ kind: "option_added", after: more.at(-1)!.text }));
});

test("moving one question is one difference, whichever way the others slid", () => {
	expect(codes(moveQuestion(before, "bloom_density", 1, nobody))).toEqual(["question_moved"]);
	expect(codes(moveScreen(before, before.screens[0]!.key, 1))).toEqual(["screen_moved"]);
});

test("a question taken away is told with the measures that went with it", () => {
	expect(codes(removeQuestion(before, "first_bloom", nobody))).toEqual(
		expect.arrayContaining(["question_removed", "measure_removed"]),
	);
});
