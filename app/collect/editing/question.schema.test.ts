import { describe, expect, test } from "vitest";
import { draftOfDefinition, findQuestion, longestText, questionsOf } from "./draft.ts";
import { readyForms } from "../forms/ready-forms.ts";
import { fieldsOfQuestion, type QuestionFields, readQuestionFields } from "./question.schema.ts";

const draft = draftOfDefinition(readyForms.after_harvest);
const fieldsOf = (key: string) => fieldsOfQuestion(findQuestion(draft, key)!.question);
const read = (key: string, more: Partial<QuestionFields>) =>
	readQuestionFields({ ...fieldsOf(key), ...more }, draft, key, "en");
const condition = (lines: object[]) => ({ join: "all", unsure: "ask", lines }) as QuestionFields["condition"];
const line = { question: "bud_set", compare: "=", answer: "bud_set:light" } as const;

test.each(Object.entries(readyForms))("the fields of every question of %s make that question again", (_key, form) => {
	const opened = draftOfDefinition(form);
	for (const { question } of questionsOf(opened)) {
		const made = readQuestionFields(fieldsOfQuestion(question), opened, question.key, "en");
		expect(JSON.parse(JSON.stringify(made.question))).toEqual(JSON.parse(JSON.stringify(question)));
	}
});

describe("what is to be mended", () => {
	test.each<[string, Partial<QuestionFields>, string, string]>([
		["a text that is missing in both languages", { text: { en: "", es: "" } }, "text.en", "empty"],
		["a text beyond its limit", { help: { en: "x".repeat(longestText + 1), es: "" } }, "help.en", "too_long_limit"],
		["crossed limits", { limits: { hardMin: "10", hardMax: "5" } }, "limits.hardMax", "limits_crossed"],
		["a soft limit outside a hard one", { limits: { hardMax: "5", softMax: "6" } }, "limits.softMax", "limits_outside"],
		[
			"a soft limit below all that is taken",
			{ limits: { hardMin: "5", softMin: "4" } },
			"limits.softMin",
			"limits_outside",
		],
		["a limit that is no number", { limits: { hardMax: "many" } }, "limits.hardMax", "not_a_number"],
		["a limit in another unit than is kept", { limits: { hardMax: "20 kg" } }, "limits.hardMax", "not_a_number"],
	])("%s is told beside its field", (_case, more, field, code) => {
		expect(read("harvested", more).problems).toEqual([expect.objectContaining({ field, code })]);
	});

	test("a condition on a later question, and one without an answer", () => {
		expect(read("harvested", { condition: condition([line]) }).problems).toEqual([
			{ field: "condition.lines[0].question", code: "condition_place" },
		]);
		const first = { question: "harvested", compare: ">", value: "" };
		expect(read("bud_set", { condition: condition([first]) }).problems).toEqual([
			{ field: "condition.lines[0].value", code: "condition_value" },
		]);
		const made = read("bud_set", { condition: condition([{ ...first, value: "1,000" }]) });
		// Asked once, of a question that each planting has: one planting is enough.
		expect(made.question?.condition).toEqual({
			any_planting: { compare: ">", question: "harvested", to: { value: 1000 } },
		});
	});

	test("a percent may have its sign, and a length the comma of a thousand", () => {
		const percent = read("cause_freeze", { limits: { hardMin: "0", hardMax: "80 %" } });
		expect(percent.question).toMatchObject({ limits: { hardMin: 0, hardMax: 80 } });
		expect(read("comment", { maxLength: "1,000" }).question).toMatchObject({ maxLength: 1000 });
		expect(read("comment", { maxLength: "12.5" }).problems).toEqual([{ field: "maxLength", code: "not_whole" }]);
	});

	test("another kind of answer is begun as a new question's, since the page did not show its fields", () => {
		const typed = { limits: { hardMax: "many" } };
		const choice = read("harvested", { ...typed, type: "choice" });
		expect(choice.problems).toEqual([]);
		expect(choice.question).toMatchObject({ options: [{ text: { en: "", es: "" } }, { text: { en: "", es: "" } }] });
		expect(read("harvested", { ...typed, type: "percent" }).question).toMatchObject({
			limits: { hardMin: 0, hardMax: 100 },
		});
		// Where both kinds have the same fields, what is in them stays.
		const several = read("bud_set", { type: "several" }).question;
		expect(several).toMatchObject({ options: fieldsOf("bud_set").options.map(({ key }) => ({ key })) });
	});

	test("fewer than two answers to choose from", () => {
		const { options } = fieldsOf("bud_set");
		expect(read("bud_set", { options: options.slice(0, 1) }).problems).toEqual([
			{ field: "options[1].en", code: "options_few" },
		]);
	});
});
