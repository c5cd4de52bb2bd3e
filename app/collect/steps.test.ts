import { describe, expect, test } from "vitest";
import type { Answer, FormDefinition, Question } from "./form.ts";
import { afterHarvest } from "./forms/after-harvest.ts";
import { keptAnswers, listAsked, listSteps, type PlantingAsked, questionsAsked } from "./steps.ts";

const planting = (plantingId: string, cropKey = "apple"): PlantingAsked => ({
	plantingId,
	cropKey,
	cultivar: "",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: 42,
});
const given = (questionKey: string, value: Answer["value"], plantingId: string | null = null): Answer => ({
	questionKey,
	plantingId,
	kind: "given",
	value,
	given: null,
});
const crop = (plantingId: string, normal: number, harvested: number) => [
	given("normal_crop", normal, plantingId),
	given("harvested", harvested, plantingId),
];
const two = [planting("p1"), planting("p2", "plum")];
const keysOf = (answers: Answer[], plantings = two) =>
	listSteps(afterHarvest, plantings, answers).map(({ key }) => key);
const words = { en: "Text", es: "Texto" };

describe("steps of the harvest form", () => {
	test("the planting table takes a step for each planting, the other screens one", () => {
		expect(keysOf([])).toEqual(["planting-p1", "planting-p2", "causes", "harvest_days", "next_year"]);
		expect(keysOf([], [])).toEqual(["harvest_days", "next_year"]);
	});
	test("causes are left out once it is certain that nothing was lost", () => {
		const full = [...crop("p1", 100, 100), ...crop("p2", 50, 60)];
		expect(keysOf(full)).not.toContain("causes");
		expect(keysOf([...crop("p1", 100, 100), ...crop("p2", 50, 40)])).toContain("causes");
		expect(keysOf(crop("p1", 100, 100))).toContain("causes");
		const refused: Answer = { questionKey: "harvested", plantingId: "p2", kind: "refused", value: null, given: null };
		expect(keysOf([...crop("p1", 100, 100), given("normal_crop", 50, "p2"), refused])).toContain("causes");
	});
	test("an answer about a planting that is not asked about decides nothing", () => {
		expect(keysOf([...crop("p1", 100, 100), ...crop("gone", 100, 0)], [planting("p1")])).not.toContain("causes");
	});
});

describe("what is kept", () => {
	const causes = [given("cause_freeze", 75), given("cause_other", 25)];
	test("the answers of questions that are asked, in the order of the form", () => {
		const lost = [...causes, ...crop("p1", 100, 0), ...crop("p2", 50, 50)];
		expect(keptAnswers(afterHarvest, two, lost)).toEqual([...crop("p1", 100, 0), ...crop("p2", 50, 50), ...causes]);
	});
	test("not those that are hidden, of another planting or of no question", () => {
		const full = [...crop("p1", 100, 100), ...crop("p2", 50, 50)];
		const stray = [given("harvested", 1, "gone"), given("harvested", 1), given("constructor", 1), ...causes];
		expect(keptAnswers(afterHarvest, two, [...stray, ...full])).toEqual(full);
	});
});

const ifYes = (question: string) => ({ compare: "=" as const, question, to: { value: "yes" } });

describe("conditions on single questions", () => {
	const choice = (key: string, condition?: Question["condition"]): Question => ({
		key,
		type: "choice",
		text: words,
		required: true,
		sensitive: false,
		condition,
		options: [
			{ key: "yes", text: words },
			{ key: "no", text: words },
		],
	});
	const form: FormDefinition = {
		key: "seen",
		title: words,
		minutes: 1,
		measures: [],
		screens: [
			{ key: "first", title: words, perPlanting: false, questions: [choice("seen")] },
			{ key: "second", title: words, perPlanting: false, questions: [choice("spread", ifYes("seen"))] },
			{
				key: "third",
				title: words,
				perPlanting: true,
				questions: [choice("sprayed", ifYes("spread")), choice("picked"), choice("sold", ifYes("picked"))],
			},
			{ key: "fourth", title: words, perPlanting: true, questions: [choice("again")] },
		],
	};
	const one = [planting("p1")];
	const askedOf = (answers: Answer[]) =>
		listSteps(form, one, answers).map((step) => [
			step.key,
			...questionsAsked(step, form, one, answers).map(({ key }) => key),
		]);

	test("a step without a question that is asked is left out", () => {
		expect(askedOf([given("seen", "no")]).map(([key]) => key)).toEqual(["first", "planting-p1", "fourth-p1"]);
	});
	test("in a planting's step, its own answers and those told once decide", () => {
		expect(askedOf([given("seen", "yes"), given("spread", "no"), given("picked", "no", "p1")])).toEqual([
			["first", "seen"],
			["second", "spread"],
			["planting-p1", "picked"],
			["fourth-p1", "again"],
		]);
	});
	test("what follows from a hidden answer is decided as if it had not been given", () => {
		const answers = [given("seen", "no"), given("spread", "no"), given("sprayed", "yes", "p1")];
		expect(askedOf(answers)[1]).toEqual(["planting-p1", "sprayed", "picked", "sold"]);
		const kept = keptAnswers(form, one, answers);
		expect(kept.map(({ questionKey }) => questionKey)).toEqual(["seen", "sprayed"]);
		expect(keptAnswers(form, one, kept)).toEqual(kept);
	});
	test("a step that is not asked has no questions", () => {
		const [, second] = listSteps(form, one, [given("seen", "yes")]);
		expect(questionsAsked(second!, form, one, [given("seen", "no")])).toEqual([]);
	});
	test("what is to be skipped while nothing is sure waits for the answer that asks for it", () => {
		const later = { ...choice("spread", ifYes("seen")), whenUnsure: "skip" as const };
		const screens = form.screens.with(1, { ...form.screens[1]!, questions: [later] });
		const keys = (answers: Answer[]) => listSteps({ ...form, screens }, one, answers).map(({ key }) => key);
		expect(keys([])).not.toContain("second");
		const silent: Answer = { questionKey: "seen", plantingId: null, kind: "dont_know", value: null, given: null };
		expect(keys([silent])).not.toContain("second");
		expect(keys([given("seen", "yes")])).toContain("second");
	});
	test("a planting is offered the options of its crop, and asked nothing where none is left", () => {
		const option = (key: string, more = {}) => ({ key, text: words, ...more });
		const seen: Question = {
			key: "seen",
			type: "several",
			text: words,
			required: true,
			sensitive: false,
			options: [
				option("scab", { crops: ["apple"] }),
				option("brown_rot", { crops: ["tart_cherry", "plum"] }),
				option("black_knot", { crops: ["plum"] }),
				option("none", { alone: true }),
			],
		};
		const screens = [{ key: "only", title: words, perPlanting: true, questions: [seen] }];
		const all = [planting("p1"), planting("p2", "plum"), planting("p3", "pawpaw")];
		const offered = listAsked({ ...form, screens }, all, []).map(({ step, questions }) => [
			step.key,
			questions.flatMap((question) => ("options" in question ? question.options.map(({ key }) => key) : [])),
		]);
		expect(offered).toEqual([
			["planting-p1", ["scab", "none"]],
			["planting-p2", ["brown_rot", "black_knot", "none"]],
		]);
	});
});
