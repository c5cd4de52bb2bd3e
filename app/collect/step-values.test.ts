import { describe, expect, test } from "vitest";
import type { Answer, Question } from "./form.ts";
import { afterHarvest } from "./forms/after-harvest.ts";
import { readStep, type StepValues } from "./step-fields.ts";
import { type ShowSettings, valuesOf } from "./step-values.ts";
import { listSteps, type PlantingAsked, questionsAsked, type Step } from "./steps.ts";

const planting: PlantingAsked = {
	plantingId: "p1",
	cropKey: "apple",
	cultivar: "",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: 42,
};
const hazelnut: PlantingAsked = { ...planting, cropKey: "hazelnut", plantKind: "bush", bushelLb: null };
const en = { language: "en", season: 2031, today: "2031-10-20" } as const;

function stepOf(key: string, asked = planting): [Step, Question[]] {
	const step = listSteps(afterHarvest, [asked], []).find((one) => one.key === key);
	if (!step) throw new Error(`no step ${key}`);
	return [step, questionsAsked(step, afterHarvest, [asked], [])];
}

describe("what the boxes hold", () => {
	const settings = { massUnit: "bu", language: "en" } as const;
	test("nothing at first but what the directory knows and the operation's unit", () => {
		expect(valuesOf(...stepOf("planting-p1"), [], settings)).toEqual({
			bearing_trees: "40",
			normal_crop: "",
			normal_crop_unit: "bu",
			normal_crop_crate: "",
			harvested: "",
			harvested_unit: "bu",
			harvested_crate: "",
		});
		expect(valuesOf(...stepOf("planting-p1", hazelnut), [], settings)).toMatchObject({ harvested_unit: "lb" });
	});
	test("an answer that the directory's number does not replace", () => {
		const silent: Answer = {
			questionKey: "bearing_trees",
			plantingId: "p1",
			kind: "dont_know",
			value: null,
			given: null,
		};
		const values = valuesOf(...stepOf("planting-p1"), [silent], settings);
		expect(values).toMatchObject({ bearing_trees_kind: "dont_know" });
		expect(values.bearing_trees).toBeUndefined();
	});
	test.each<[string, StepValues]>([
		[
			"planting-p1",
			{
				bearing_trees: "1,234",
				normal_crop: "$1,200 lb",
				normal_crop_unit: "lb",
				harvested_kind: "refused",
			},
		],
		["causes", { cause_freeze: "75%", cause_other: "25" }],
		["harvest_days", { first_harvest: "2031-09-01", last_harvest_kind: "dont_know" }],
		["next_year", { bud_set: "_refused", comment: "one\ntwo" }],
	])("what was typed in %s stands there again, and reads as it did", (key, typed) => {
		const step = stepOf(key);
		const first = readStep(...step, typed, en);
		if (!first.ok) throw new Error("the example does not read");
		const shown = valuesOf(...step, first.answers, settings);
		expect(shown).toMatchObject(typed);
		expect(readStep(...step, shown, en)).toEqual(first);
	});
	test("a tick for all shares stands at its one pair", () => {
		const step = stepOf("causes");
		const outcome = readStep(...step, { screen_kind: "refused" }, en);
		expect(outcome.ok && valuesOf(...step, outcome.answers, settings)).toEqual({ screen_kind: "refused" });
	});
});

const words = { en: "Text", es: "Texto" };
const number = (key: string, unitFamily: Extract<Question, { type: "number" }>["unitFamily"]): Question => ({
	key,
	type: "number",
	unitFamily,
	text: words,
	required: false,
	sensitive: false,
});
const questions = [
	number("picked", "mass"),
	number("sold", "mass"),
	number("land", "area"),
	number("coldest", "temperature"),
	number("rows", "length"),
];
const step: Step = {
	key: "planting-p1",
	screen: { key: "all", title: words, perPlanting: true, questions },
	planting,
};
const show = (answers: Answer[], more: Partial<ShowSettings> = {}) =>
	valuesOf(step, questions, answers, { massUnit: "lb", language: "en", ...more });
const answersOf = (values: StepValues, language: "en" | "es" = "en") => {
	const outcome = readStep(step, questions, values, { ...en, language });
	if (!outcome.ok) throw new Error("the example does not read");
	return outcome.answers;
};

describe("units and crates", () => {
	test("a unit that was chosen once stands at the next question", () => {
		const answers = answersOf({ picked: "40", picked_unit: "peck", coldest: "-3", coldest_unit: "celsius" });
		expect(show(answers)).toMatchObject({ sold_unit: "peck", land_unit: "acre", rows_unit: "ft" });
		const elsewhere = answers.map((answer) => ({ ...answer, plantingId: "p2" }));
		expect(show(elsewhere)).toMatchObject({ picked: "", picked_unit: "peck", coldest_unit: "celsius" });
	});
	test("what they held last time is known", () => {
		expect(show([], { crates: { apple: 38.5, plum: 20 } })).toMatchObject({ picked_crate: "38.5", sold_crate: "38.5" });
		const answers = answersOf({ picked: "40", picked_unit: "crate", picked_crate: "30" });
		expect(show(answers, { crates: { apple: 38.5 } })).toMatchObject({
			picked: "40",
			picked_unit: "crate",
			picked_crate: "30",
		});
	});
});

describe("a number typed in one language and shown in the other", () => {
	test.each([
		[
			{ picked: "12,5 bu", picked_unit: "lb" },
			{ picked: "12.5", picked_unit: "bu" },
		],
		[
			{ picked: "12,3450", picked_unit: "kg" },
			{ picked: "12.3450", picked_unit: "kg" },
		],
		[
			{ coldest: "-2,5", coldest_unit: "celsius" },
			{ coldest: "-2.5", coldest_unit: "celsius" },
		],
		[
			{ picked: "0,5", picked_unit: "crate", picked_crate: "38,5" },
			{ picked: "0.5", picked_crate: "38.5" },
		],
	])("%j reads the same again", (typed, shown) => {
		const kept = answersOf(typed, "es");
		expect(show(kept, { language: "es" })).toMatchObject({ [Object.keys(typed)[0]!]: Object.values(typed)[0] });
		const values = show(kept, { language: "en" });
		expect(values).toMatchObject(shown);
		const again = answersOf(values, "en");
		expect(again).toHaveLength(1);
		expect(again[0]!.value).toBeCloseTo(kept[0]!.value as number, 10);
	});
	test("and what both languages read stands as it was typed", () => {
		expect(show(answersOf({ picked: "$1,234 lb" }, "es"))).toMatchObject({ picked: "$1,234 lb", picked_unit: "lb" });
	});
});
