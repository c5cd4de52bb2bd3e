import { describe, expect, test } from "vitest";
import { readyForms } from "../forms/ready-forms.ts";
import { blankDraft, draftOfDefinition, type FormDraft, findQuestion, mostQuestions, questionsOf } from "./draft.ts";
import {
	addQuestion,
	copyQuestion,
	moveQuestion,
	moveQuestionTo,
	removeQuestion,
	replaceQuestion,
} from "./edit-questions.ts";
import { addScreen, moveScreen, removeScreen, replaceScreen } from "./edit-screens.ts";

const words = (en: string) => ({ en, es: `${en} (es)` });
const nobody = new Set<string>();

/** Screens "one" (once) and "two" (of each planting), with questions a, b and c, d. */
function twoScreens(): FormDraft {
	let draft = addScreen(blankDraft("hail", words("Hail")), words("One"), false).draft;
	draft = addScreen(draft, words("Two"), true).draft;
	for (const [screen, name] of [
		["one", "a"],
		["one", "b"],
		["two", "c"],
		["two", "d"],
	] as const)
		draft = done(addQuestion(draft, { screen }, "number", words(name)));
	return draft;
}

/** The draft that an edit made. */
function done(made: FormDraft | { draft: FormDraft } | string): FormDraft {
	if (typeof made === "string") throw new Error(made);
	return "draft" in made ? made.draft : made;
}

const order = (draft: FormDraft) =>
	draft.screens.map(({ key, questions }) => `${key}: ${questions.map((one) => one.key).join(" ")}`);

const causes = (form: FormDraft) => form.screens.find(({ key }) => key === "causes")?.sumToHundred;

describe("moving a question", () => {
	test("goes by one place within its screen, and from its end on to the next screen", () => {
		const draft = twoScreens();
		expect(order(draft)).toEqual(["one: a b", "two: c d"]);
		expect(order(done(moveQuestion(draft, "a", 1, nobody)))).toEqual(["one: b a", "two: c d"]);
		expect(order(done(moveQuestion(draft, "b", 1, nobody)))).toEqual(["one: a", "two: b c d"]);
		expect(order(done(moveQuestion(draft, "c", -1, nobody)))).toEqual(["one: a b c", "two: d"]);
	});

	test("stays at the beginning and the end of the form", () => {
		const draft = twoScreens();
		expect(moveQuestion(draft, "a", -1, nobody)).toEqual(draft);
		expect(moveQuestion(draft, "d", 1, nobody)).toEqual(draft);
	});

	test("takes no answered question from once an operation to once a planting, and any other one", () => {
		const draft = twoScreens();
		expect(moveQuestionTo(draft, "a", "two", "end", new Set(["a"]))).toBe("answered");
		expect(order(done(moveQuestionTo(draft, "a", "two", "end", nobody)))).toEqual(["one: b", "two: c d a"]);
		expect(moveQuestionTo(draft, "a", "three", "end", nobody)).toBe("not_found");
	});
});

describe("adding and copying", () => {
	test("give keys of their own, which no field of another question can have", () => {
		const draft = done(addQuestion(twoScreens(), { screen: "one" }, "number", words("Trees")));
		const again = addQuestion(draft, { screen: "one" }, "percent", words("Trees"));
		expect(again).toMatchObject({ key: "trees2" });
		const ending = addQuestion(draft, { screen: "one" }, "percent", words("Trees unit"));
		expect(ending).toMatchObject({ key: "treesunit" });
		expect(copyQuestion(draft, "trees")).toMatchObject({ key: "trees2" });
	});

	test("put a copy right behind what it is made of", () => {
		const copied = copyQuestion(twoScreens(), "a");
		expect(order(done(copied))).toEqual(["one: a a2 b", "two: c d"]);
	});

	test("end at two hundred questions", () => {
		let draft = twoScreens();
		while (questionsOf(draft).length < mostQuestions)
			draft = done(addQuestion(draft, { screen: "one" }, "date", words("Day")));
		expect(addQuestion(draft, { screen: "one" }, "date", words("Day"))).toBe("too_many");
		expect(copyQuestion(draft, "a")).toBe("too_many");
		expect(new Set(questionsOf(draft).map(({ question }) => question.key)).size).toBe(mostQuestions);
	});
});

describe("removing", () => {
	test("takes the measures made of a question along, and what others say of being made of those", () => {
		const draft = draftOfDefinition(readyForms.after_harvest);
		const left = done(removeQuestion(draft, "harvested", nobody));
		expect(findQuestion(left, "harvested")).toBeUndefined();
		expect(JSON.stringify(left.measures)).not.toContain('"harvested"');
		const bases = left.measures.filter(({ base }) => base).map(({ key }) => key);
		const named = left.measures.flatMap(({ protects = [] }) => protects);
		expect(bases).toEqual(expect.arrayContaining(named.map((key) => `base.${key}`)));
		expect(JSON.stringify(left.screens[0]!.checks)).not.toContain('"question":"harvested","message"');
	});

	test("takes a share out of the sum that it was part of", () => {
		const draft = draftOfDefinition(readyForms.after_harvest);
		expect(causes(draft)).toContain("cause_other");
		expect(causes(done(removeQuestion(draft, "cause_other", nobody)))).not.toContain("cause_other");
	});

	test("is refused of what growers have answered, and of a screen that asks it", () => {
		const draft = twoScreens();
		expect(removeQuestion(draft, "a", new Set(["a"]))).toBe("answered");
		expect(removeScreen(draft, "one", new Set(["a"]))).toBe("answered");
		expect(order(done(removeScreen(draft, "two", new Set(["a"]))))).toEqual(["one: a b"]);
		expect(removeQuestion(draft, "zucchini", nobody)).toBe("not_found");
	});
});

const codesOf = (draft: FormDraft, key: string) => {
	const question = findQuestion(draft, key)?.question;
	return question?.type === "short_text" ? question.codes : "gone";
};

describe("removing what words are counted as", () => {
	test("takes it from their codes, and the codes with the last of it", () => {
		const draft = draftOfDefinition(readyForms.after_harvest);
		expect(codesOf(draft, "other_cause")).toMatchObject({ to: expect.arrayContaining(["cause_freeze"]) });
		const left = done(removeQuestion(draft, "cause_freeze", nobody));
		expect(codesOf(left, "other_cause")).toEqual({
			moves: "cause_other",
			to: expect.not.arrayContaining(["cause_freeze"]),
		});
		expect(codesOf(done(removeQuestion(left, "cause_other", nobody)), "other_cause")).toBeUndefined();
		expect(codesOf(done(removeScreen(draft, "causes", nobody)), "other_cause")).toBeUndefined();
		const pests = done(removeQuestion(draftOfDefinition(readyForms.pests), "seen", nobody));
		expect(codesOf(pests, "other_pest")).toBeUndefined();
	});
});

describe("changing", () => {
	test("lets other words of an answered question pass, and no other type, unit or lost answer", () => {
		const draft = draftOfDefinition(readyForms.after_harvest);
		const held = new Set(["harvested", "bud_set"]);
		const { question } = findQuestion(draft, "harvested")!;
		if (question.type !== "number") throw new Error(question.type);
		expect(replaceQuestion(draft, { ...question, text: words("Picked") }, held)).toMatchObject({ key: draft.key });
		expect(replaceQuestion(draft, { ...question, unitFamily: "count" }, held)).toBe("answered");
		const buds = findQuestion(draft, "bud_set")!.question;
		if (buds.type !== "rating") throw new Error(buds.type);
		expect(replaceQuestion(draft, { ...buds, options: buds.options.slice(1) }, held)).toBe("answered");
		const more = [...buds.options, { key: "huge", text: words("Huge") }];
		expect(replaceQuestion(draft, { ...buds, options: more }, held)).toMatchObject({ key: draft.key });
	});

	test("leaves a screen with answers as often asked as it was", () => {
		const draft = twoScreens();
		const one = draft.screens[0]!;
		expect(replaceScreen(draft, "one", { ...one, perPlanting: true }, new Set(["a"]))).toBe("answered");
		expect(done(replaceScreen(draft, "one", { ...one, perPlanting: true }, nobody)).screens[0]!.perPlanting).toBe(true);
	});

	test("moves screens, which stay at either end", () => {
		expect(order(done(moveScreen(twoScreens(), "two", -1)))).toEqual(["two: c d", "one: a b"]);
		expect(moveScreen(twoScreens(), "one", -1)).toEqual(twoScreens());
	});
});
