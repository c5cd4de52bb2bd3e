import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { FormDefinition, Question } from "./form.ts";
import { afterHarvest } from "./forms/after-harvest.ts";
import { readStep, type StepValues } from "./step-fields.ts";
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
const es = { ...en, language: "es" } as const;

function stepOf(key: string, asked = planting, form: FormDefinition = afterHarvest): [Step, Question[]] {
	const step = listSteps(form, [asked], []).find((one) => one.key === key);
	if (!step) throw new Error(`no step ${key}`);
	return [step, questionsAsked(step, form, [asked], [])];
}
/** What reading gives, shortly: values by question, a silence by its name, or what to mend by field. */
function read(step: [Step, Question[]], values: StepValues, settings: typeof en | typeof es = en) {
	const outcome = readStep(...step, values, settings);
	if (!outcome.ok)
		return {
			mend: Object.fromEntries(
				outcome.problems.map(({ field, code, detail }) => [field, detail ? [code, detail] : code]),
			),
		};
	return Object.fromEntries(
		outcome.answers.map(({ questionKey, kind, value }) => [questionKey, kind === "given" ? value : kind]),
	);
}

describe("weights", () => {
	const step = stepOf("planting-p1");
	const harvested = (typed: string, unit = "lb", settings: typeof en | typeof es = en, of = step) => {
		const values = { bearing_trees: "1", normal_crop: "1", normal_crop_unit: "lb" };
		const outcome = read(of, { ...values, harvested: typed, harvested_unit: unit }, settings);
		return "mend" in outcome ? (outcome.mend as Record<string, unknown>).harvested : outcome.harvested;
	};

	test.each([
		["40", "bu", 1680],
		["12.5 bu", "lb", 525],
		["$1,200 lb", "bu", 1200],
		["1,234", "lb", 1234],
		["1.5", "ton", 3000],
		["0", "kg", 0],
	])("%j with %j chosen is %d lb", (typed, unit, pounds) => expect(harvested(typed, unit)).toBe(pounds));

	test("a decimal comma is asked back in English and understood in Spanish", () => {
		expect(harvested("12,5 bu", "lb", en)).toBe("ambiguous_number");
		expect(harvested("12,5 bu", "lb", es)).toBe(525);
	});

	test.each([
		["-5", "lb", "negative"],
		["forty", "lb", "not_a_number"],
		["<b>40</b>", "lb", "not_a_number"],
		["3 t", "lb", "unit_unknown"],
		["40 bins", "lb", "unit_unknown"],
		["30%", "lb", "unit_unknown"],
		["40", "", "unit_missing"],
		["40", "bin", "unit_unknown"],
		["40", "constructor", "unit_unknown"],
		["4".repeat(61), "lb", "too_long"],
		["4".repeat(2_000_000), "lb", "too_long"],
		["200,000,001", "lb", ["too_large_limit", { max: 200_000_000 }]],
		["1e9", "lb", "not_a_number"],
		["", "lb", "empty"],
	])("%.20j with %j chosen is asked back: %j", (typed, unit, code) => expect(harvested(typed, unit)).toEqual(code));

	test("a limit is told in the unit that was used", () => {
		expect(harvested("100,001", "ton")).toEqual(["too_large_limit", { max: 100_000 }]);
	});

	test("a bushel is not taken for a crop that has none, typed or chosen", () => {
		const ofHazelnut = stepOf("planting-p1", hazelnut);
		expect(harvested("40", "bu", en, ofHazelnut)).toBe("unit_unknown");
		expect(harvested("40 bu", "lb", en, ofHazelnut)).toBe("unit_unknown");
		expect(harvested("40 kg", "lb", en, ofHazelnut)).toBeCloseTo(88.185, 3);
	});
});

const trees = (typed: string, more: StepValues = {}) => {
	const kinds = { normal_crop_kind: "refused", harvested_kind: "refused" };
	const outcome = read(stepOf("planting-p1"), { bearing_trees: typed, ...kinds, ...more });
	return "mend" in outcome ? (outcome.mend as Record<string, unknown>).bearing_trees : outcome.bearing_trees;
};

describe("counts", () => {
	test.each([
		["40 trees", 40],
		["0", 0],
		["1,234", 1234],
		["40.5", "not_whole"],
		["40 lb", "unit_unknown"],
		["40%", "unit_unknown"],
		["2,000,001", ["too_large_limit", { max: 2_000_000 }]],
	])("%j trees: %j", (typed, expected) => expect(trees(typed)).toEqual(expected));

	test("an answer is a value or one tick, not both", () => {
		expect(trees("", { bearing_trees_kind: "dont_know" })).toBe("dont_know");
		expect(trees(" ", { bearing_trees_kind: ["refused"] })).toBe("refused");
		expect(trees("40", { bearing_trees_kind: "dont_know" })).toBe("value_and_unknown");
		expect(trees("0", { bearing_trees_kind: "refused" })).toBe("value_and_unknown");
		expect(trees("", { bearing_trees_kind: ["dont_know", "refused"] })).toBe("value_and_unknown");
		expect(trees("", { bearing_trees_kind: "maybe" })).toBe("choice_wrong");
		expect(trees("")).toBe("empty");
	});
});

describe("shares that make a hundred", () => {
	const causes = stepOf("causes");
	const others = ["poor_pollination", "hail_wind", "drought_heat", "too_wet", "disease", "pests", "other"];
	const nothing = Object.fromEntries(others.map((cause) => [`cause_${cause}`, 0]));

	test("those left blank beside others took nothing, and nothing was typed for them", () => {
		expect(read(causes, { cause_freeze: "75%", cause_hail_wind: "25" })).toEqual({
			...nothing,
			cause_freeze: 75,
			cause_hail_wind: 25,
		});
		const outcome = readStep(...causes, { cause_freeze: "100" }, en);
		expect(outcome.ok && outcome.answers.at(-1)).toEqual({
			questionKey: "cause_other",
			plantingId: null,
			kind: "given",
			value: 0,
			given: { text: "" },
		});
	});
	test("all blank is skipped", () => {
		expect(read(causes, {})).toEqual({});
		expect(read(causes, { cause_freeze: " \t", cause_other: "" })).toEqual({});
	});
	test("a hundredth more or less is rounding", () => {
		const thirds = { cause_freeze: "33.33", cause_disease: "33.33", cause_pests: "33.33" };
		expect(read(causes, thirds)).toMatchObject({ cause_freeze: 33.33, cause_other: 0 });
		expect(read(causes, { cause_freeze: "99.98" })).toEqual({
			mend: { cause_freeze: ["sum_not_hundred_limit", { total: 99.98 }] },
		});
	});
	test("another sum is told at the first field, with what it is now", () => {
		expect(read(causes, { cause_hail_wind: "60", cause_other: "60" })).toEqual({
			mend: { cause_freeze: ["sum_not_hundred_limit", { total: 120 }] },
		});
		expect(read(causes, { cause_other: "0" })).toEqual({
			mend: { cause_freeze: ["sum_not_hundred_limit", { total: 0 }] },
		});
	});
	test("a share that cannot be read is mended before the sum", () => {
		expect(read(causes, { cause_disease: "half", cause_pests: "10" })).toEqual({
			mend: { cause_disease: "not_a_number" },
		});
		expect(read(causes, { cause_disease: "101" })).toEqual({
			mend: { cause_disease: ["too_large_limit", { max: 100 }] },
		});
		expect(read(causes, { cause_disease: "-1" })).toEqual({ mend: { cause_disease: "negative" } });
	});
	test("one tick answers for all, and ticks of single shares do not exist", () => {
		const all = Object.fromEntries(["freeze", ...others].map((cause) => [`cause_${cause}`, "dont_know"]));
		expect(read(causes, { screen_kind: "dont_know" })).toEqual(all);
		expect(read(causes, { cause_freeze_kind: "refused" })).toEqual({});
		expect(read(causes, { screen_kind: "refused", cause_other: "100" })).toEqual({
			mend: { cause_other: "value_and_unknown" },
		});
		expect(read(causes, { screen_kind: ["refused", "dont_know"] })).toEqual({
			mend: { cause_freeze: "value_and_unknown" },
		});
	});
});

describe("days", () => {
	const days = stepOf("harvest_days");
	test.each([
		["2031-09-01", "2031-10-20", { first_harvest: "2031-09-01", last_harvest: "2031-10-20" }],
		["2031-09-01", "2031-09-01", { first_harvest: "2031-09-01", last_harvest: "2031-09-01" }],
		["", "", {}],
		["", "2031-09-01", { last_harvest: "2031-09-01" }],
		["2031-02-29", "", { mend: { first_harvest: "date_wrong" } }],
		["09/01/2031", "", { mend: { first_harvest: "date_wrong" } }],
		["2031-9-1", "", { mend: { first_harvest: "date_wrong" } }],
		["2030-12-31", "", { mend: { first_harvest: "date_outside_season" } }],
		["", "2031-10-21", { mend: { last_harvest: "date_in_future" } }],
		["2031-10-02", "2031-10-01", { mend: { last_harvest: "date_order" } }],
		["2031-13-01", "2031-10-01", { mend: { first_harvest: "date_wrong" } }],
	])("from %j to %j", (first_harvest, last_harvest, expected) => {
		expect(read(days, { first_harvest, last_harvest })).toEqual(expected);
	});
	test("a day may be not known", () => {
		expect(read(days, { first_harvest_kind: "dont_know", last_harvest: "2031-09-01" })).toEqual({
			first_harvest: "dont_know",
			last_harvest: "2031-09-01",
		});
	});
});

describe("choices and texts", () => {
	const next = stepOf("next_year");
	test.each([
		["light", "light"],
		["_dont_know", "dont_know"],
		["_refused", "refused"],
		[["light", "light"], "light"],
		["", undefined],
	])("%j chosen is %j", (bud_set, expected) => {
		expect(read(next, { bud_set })).toEqual(expected ? { bud_set: expected } : {});
	});
	test.each([
		["huge", "choice_wrong"],
		["constructor", "choice_wrong"],
		["x".repeat(2_000_000), "choice_wrong"],
		[["light", "heavy"], "choice_wrong"],
		[["light", "_refused"], "value_and_unknown"],
		[["_dont_know", "_refused"], "value_and_unknown"],
	])("%.20j chosen is asked back: %s", (bud_set, code) => {
		expect(read(next, { bud_set })).toEqual({ mend: { bud_set: code } });
	});

	test("a text is kept as typed, within its length in characters", () => {
		expect(read(next, { comment: " <script>alert(1)</script>\r\n\u0000 " })).toEqual({
			comment: "<script>alert(1)</script>",
		});
		const apples = "\u{1f34e}".repeat(5000);
		expect(read(next, { comment: apples })).toEqual({ comment: apples });
		for (const comment of ["a".repeat(5001), "a".repeat(2_000_000)])
			expect(read(next, { comment })).toEqual({ mend: { comment: ["too_long_limit", { max: 5000 }] } });
	});
	test("fields that no question has are left aside", () => {
		expect(read(next, { bud_set: "light", harvested: "5", __proto__: "x", submit: "on" })).toEqual({
			bud_set: "light",
		});
	});
	test("several are kept in the order of the form, each once", () => {
		const words = { en: "Text", es: "Texto" };
		const question: Question = {
			key: "used",
			type: "several",
			text: words,
			required: true,
			sensitive: false,
			options: ["fans", "water", "nothing"].map((key) => ({ key, text: words })),
		};
		const screens = [{ key: "only", title: words, perPlanting: false, questions: [question] }];
		const step = stepOf("only", planting, { ...afterHarvest, screens });
		expect(read(step, { used: ["water", "fans", "water"] })).toEqual({ used: ["fans", "water"] });
		expect(read(step, { used: "water" })).toEqual({ used: ["water"] });
		expect(read(step, { used: ["_dont_know"] })).toEqual({ used: "dont_know" });
		expect(read(step, { used: ["water", "_dont_know"] })).toEqual({ mend: { used: "value_and_unknown" } });
		expect(read(step, {})).toEqual({ mend: { used: "empty" } });
	});
});

test("whatever is posted, reading gives answers of the step's questions or problems of its fields", () => {
	const texts = fc.oneof(
		fc.string({ unit: "binary" }),
		fc.constantFrom("5", "5 bu", "5 cajas", "_refused", "dont_know", "2031-09-01"),
	);
	const anything = fc.oneof(texts, fc.array(texts, { maxLength: 3 }), fc.anything());
	fc.assert(
		fc.property(
			fc.constantFrom("planting-p1", "causes", "harvest_days", "next_year"),
			fc.infiniteStream(anything),
			(key, stream) => {
				const [step, questions] = stepOf(key);
				const names = questions.flatMap((question) =>
					["", "_kind", "_unit", "_crate"].map((end) => question.key + end),
				);
				const posted = Object.fromEntries([...names, "screen_kind"].map((name) => [name, stream.next().value]));
				const outcome = readStep(step, questions, posted as StepValues, en);
				const keys = new Set(questions.flatMap((one) => (outcome.ok ? [one.key] : [one.key, `${one.key}_crate`])));
				const named = outcome.ok
					? outcome.answers.map((one) => one.questionKey)
					: outcome.problems.map((one) => one.field);
				expect(new Set(named).size).toBe(named.length);
				expect(named.filter((name) => !keys.has(name))).toEqual([]);
				// Kept as JSON, it comes back as it was.
				if (outcome.ok) expect(JSON.parse(JSON.stringify(outcome.answers))).toEqual(outcome.answers);
			},
		),
	);
});
