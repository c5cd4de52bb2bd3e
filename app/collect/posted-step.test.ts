import { describe, expect, test } from "vitest";
import type { Condition } from "#app/lib/condition.ts";
import type { Answer, FormDefinition, Question } from "./form.ts";
import type { StepValues } from "./posted.ts";
import { readPostedStep } from "./posted-step.ts";

const words = { en: "Text", es: "Texto" };
const base = { text: words, required: true, sensitive: false };
const whenUsed = (value: string): Condition => ({ compare: "=", question: "used", to: { value } });
const number = (key: string, condition?: Condition): Question => ({
	...base,
	key,
	type: "number",
	unitFamily: "count",
	condition,
});
const used: Question = {
	...base,
	key: "used",
	type: "several",
	options: [
		{ key: "water", text: words },
		{ key: "fans", text: words },
		{ key: "none", text: words, alone: true },
	],
};
const form: FormDefinition = {
	key: "form",
	title: words,
	minutes: 1,
	measures: [],
	screens: [
		{
			key: "one",
			title: words,
			perPlanting: false,
			questions: [used, number("hours", whenUsed("water")), number("fans_running", whenUsed("fans"))],
		},
		{ key: "two", title: words, perPlanting: false, questions: [number("again")], condition: whenUsed("fans") },
	],
};
const settings = { language: "en", season: 2031, today: "2031-10-20" } as const;
const post = (values: StepValues, answers: Answer[] = [], stepKey = "one") => {
	const posted = readPostedStep({ definition: form, plantings: [], answers }, stepKey, values, settings);
	return (
		posted && {
			asked: posted.questions.map(({ key }) => key),
			values: Object.fromEntries(posted.answers.map(({ questionKey, value }) => [questionKey, value])),
			problems: posted.problems.map(({ field, code }) => `${field}: ${code}`),
		}
	);
};

describe("conditions among the questions of one screen", () => {
	test("what an answer of the screen rules out may stand empty", () => {
		expect(post({ used: "water", hours: "6" })).toEqual({
			asked: ["used", "hours"],
			values: { used: ["water"], hours: 6 },
			problems: [],
		});
		expect(post({ used: "none" })).toEqual({ asked: ["used"], values: { used: ["none"] }, problems: [] });
	});
	test("or odd; what can be read is kept, since it may come back", () => {
		expect(post({ used: "none", hours: "six", fans_running: "3" })).toMatchObject({
			values: { used: ["none"], fans_running: 3 },
			problems: [],
		});
	});
	test("what it asks must be told, whatever was kept before", () => {
		const before: Answer[] = [
			{ questionKey: "used", plantingId: null, kind: "given", value: ["none"], given: null },
			{ questionKey: "hours", plantingId: null, kind: "given", value: 6, given: { text: "6" } },
		];
		expect(post({ used: ["water", "fans"] }, before)).toMatchObject({
			asked: ["used", "hours", "fans_running"],
			problems: ["hours: empty", "fans_running: empty"],
		});
	});
	test("where the deciding answer cannot be read, everything is asked", () => {
		expect(post({ used: ["none", "water"] })).toMatchObject({
			asked: ["used", "hours", "fans_running"],
			problems: ["used: none_and_some", "hours: empty", "fans_running: empty"],
		});
	});
	test("a silence decides nothing", () => {
		expect(post({ used: "_dont_know", hours: "6", fans_running_kind: "dont_know" })).toMatchObject({
			asked: ["used", "hours", "fans_running"],
			problems: [],
		});
	});
});

test("a step that is not asked, or made up, is none", () => {
	const none: Answer[] = [{ questionKey: "used", plantingId: null, kind: "given", value: ["none"], given: null }];
	expect(post({ again: "1" }, none, "two")).toBeUndefined();
	expect(post({ again: "1" }, [], "three")).toBeUndefined();
	expect(post({ again: "1" }, [], "two")).toMatchObject({ values: { again: 1 } });
});
