import { describe, expect, test } from "vitest";
import type { Condition } from "#app/lib/condition.ts";
import { FormDefinition, type Question } from "../form.ts";
import { readyForms } from "../forms/ready-forms.ts";
import { findingsOf, finishedForm } from "./before-opening.ts";
import { blankDraft, definitionOfDraft, draftOfDefinition, type FormDraft } from "./draft.ts";
import { newQuestion } from "./edit-questions.ts";

const words = (en: string) => ({ en, es: `${en} (es)` });
const nobody = new Set<string>();
const number = (key: string, more: Partial<Question> = {}) =>
	({ ...newQuestion(key, "number", words(key)), ...more }) as Question;

/** One screen of a hail form with these questions. */
function formOf(...questions: Question[]): FormDraft {
	const screen = { key: "hail", title: words("Hail"), perPlanting: false, questions };
	return { ...blankDraft("hail", words("Hail")), screens: [screen] };
}
const limits = (given: object) => formOf(number("trees", { limits: given } as Partial<Question>));
const codes = (draft: FormDraft) => findingsOf(draft, nobody).map(({ kind }) => kind);

test.each(Object.entries(readyForms))(
	"%s opened for writing makes a form again, and nothing blocks it",
	(_key, form) => {
		const draft = draftOfDefinition(form);
		expect(findingsOf(draft, nobody).filter(({ blocks }) => blocks)).toEqual([]);
		const finished = finishedForm(draft, nobody)!;
		expect(finished.screens).toEqual(FormDefinition.parse(form).screens);
		expect(finished.measures.map(({ key }) => key)).toEqual(
			expect.arrayContaining(form.measures.map(({ key }) => key)),
		);
		expect(Math.abs(finished.minutes - form.minutes)).toBeLessThanOrEqual(1);
		expect(definitionOfDraft(draftOfDefinition(finished))).toEqual(finished);
	},
);

describe("what blocks", () => {
	test("a text that one language lacks, told with its language and its place", () => {
		const draft = formOf(number("trees", { text: { en: "Trees", es: " " } }));
		const missing = { kind: "untranslated", blocks: true, language: "es" };
		// Once: its measure is called as it is.
		expect(findingsOf(draft, nobody)).toEqual([{ ...missing, questionKey: "trees" }]);
		expect(finishedForm(draft, nobody)).toBeUndefined();
		const measure = definitionOfDraft(draft).measures.find(({ base }) => !base);
		const label = { en: "Trees left", es: "" };
		const renamed = { ...formOf(number("trees")), names: { [measure!.key]: label } };
		expect(findingsOf(renamed, nobody)).toEqual([{ ...missing, measureKey: measure!.key, about: label }]);
	});

	test("a form without a question, a screen without one, and a form that only asks for texts", () => {
		expect(codes(blankDraft("hail", words("Hail")))).toEqual(["no_question"]);
		expect(codes(formOf())).toEqual(["no_question", "screen_empty"]);
		expect(codes(formOf(newQuestion("note", "long_text", words("Note"))))).toEqual(["no_measure"]);
	});

	test.each<[string, Condition, string]>([
		["a question that is gone", { compare: ">", question: "hailed", to: { value: 0 } }, "condition_gone"],
		["a question that comes later", { compare: ">", question: "fruit", to: { value: 0 } }, "condition_later"],
		["the question itself", { compare: ">", question: "trees", to: { value: 0 } }, "condition_later"],
		["a text for a number", { compare: "=", question: "acres", to: { value: "many" } }, "condition_wrong"],
		["more than its limits let be answered", { compare: ">", question: "acres", to: { value: 500 } }, "unreachable"],
	])("a condition on %s", (_case, condition, code) => {
		const acres = number("acres", { limits: { hardMin: 0, hardMax: 100 } } as Partial<Question>);
		const draft = formOf(acres, number("trees", { condition }), number("fruit"));
		expect(codes(draft)).toContain(code);
		expect(finishedForm(draft, nobody)).toBeUndefined();
	});

	test("a condition on a question that comes later, once", () => {
		const condition: Condition = { compare: "=", question: "trees", to: { value: 1 } };
		const draft = formOf(number("fruit", { condition }), number("trees"));
		expect(findingsOf(draft, nobody)).toEqual([
			{ kind: "condition_later", blocks: true, questionKey: "fruit", about: words("trees") },
		]);
	});

	test("a question that only two answers at once could lead to, which exclude each other", () => {
		const some: Condition = { compare: ">", question: "acres", to: { value: 10 } };
		const few: Condition = { compare: "<", question: "acres", to: { value: 5 } };
		const draft = formOf(number("acres"), number("trees", { condition: some }), number("fruit", { condition: few }));
		expect(codes(draft)).not.toContain("unreachable");
		const both = formOf(number("acres"), number("trees", { condition: { all: [some, few] } }));
		expect(codes(both)).toContain("unreachable");
		const chained: Condition = { all: [few, { compare: ">=", question: "trees", to: { value: 0 } }] };
		const chain = formOf(
			number("acres"),
			number("trees", { condition: some }),
			number("fruit", { condition: chained, whenUnsure: "skip" }),
		);
		expect(codes(chain)).toContain("unreachable");
	});

	test("limits that leave nothing between them, and a soft one outside a hard one", () => {
		expect(codes(limits({ hardMin: 10, hardMax: 5 }))).toContain("limits_crossed");
		expect(codes(limits({ hardMax: 5, softMax: 6 }))).toContain("limits_crossed");
		expect(codes(limits({ hardMin: 0, hardMax: 5, softMax: 4 }))).not.toContain("limits_crossed");
	});

	test("fewer than two answers to choose from, and a key that names two things", () => {
		const choice = newQuestion("sort", "choice", words("Sort"));
		if (!("options" in choice)) throw new Error("no options");
		expect(codes(formOf({ ...choice, options: [{ key: "a", text: words("A") }] }))).toContain("options_few");
		expect(codes(formOf(number("trees"), number("trees")))).toContain("key_twice");
	});

	test("words to be counted as what the form does not ask", () => {
		const note = { ...newQuestion("note", "short_text", words("Note")), codes: { adds: "pests" } } as Question;
		expect(findingsOf(formOf(number("trees"), note), nobody)).toContainEqual({
			kind: "codes_wrong",
			blocks: true,
			questionKey: "note",
		});
	});

	test("a question with answers that is gone or asks for something else", () => {
		const published = FormDefinition.parse(definitionOfDraft(formOf(number("trees"), number("fruit"))));
		const held = new Set(["trees"]);
		const found = (draft: FormDraft) => findingsOf(draft, held, published).map(({ kind }) => kind);
		expect(found(formOf(number("fruit")))).toEqual(["answered_gone"]);
		expect(found(formOf(newQuestion("trees", "percent", words("trees"))))).toEqual(["answered_changed"]);
		expect(found(formOf(number("trees", { text: words("Which trees") })))).toEqual([]);
	});
});

test("more than five minutes is told, and blocks nothing", () => {
	const many = Array.from({ length: 30 }, (_, i) => number(`q${String.fromCharCode(97 + i)}`));
	const found = findingsOf(formOf(...many.slice(0, 20)), nobody);
	expect(found).toEqual([{ kind: "too_long", blocks: false, count: 7 }]);
});

test("a name that a default measure was given is kept when the form is opened again", () => {
	const draft = { ...formOf(number("trees")), names: { trees: words("Trees hit") } };
	const finished = finishedForm(draft, nobody)!;
	expect(finished.measures[0]).toMatchObject({ key: "trees", label: words("Trees hit") });
	expect(draftOfDefinition(finished)).toEqual(draft);
});
