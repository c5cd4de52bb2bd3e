import { describe, expect, test } from "vitest";
import type { Answer, FormDefinition, Measure, Question } from "#app/collect/form.ts";
import { factsOf, type SubmittedResponse } from "./facts.ts";

const words = { en: "Text", es: "Texto" };
const base = { text: words, required: false, sensitive: false };
const seen = { compare: "=" as const, question: "seen", to: { value: "scab" } };
const questions: Question[] = [
	{
		...base,
		key: "seen",
		type: "several",
		options: [
			{ key: "scab", text: words },
			{ key: "none", text: words },
		],
	},
	{ ...base, key: "scab_trees", type: "percent", condition: seen },
	{
		...base,
		key: "scab_severity",
		type: "rating",
		condition: seen,
		options: [
			{ key: "light", text: words, score: 1 },
			{ key: "severe", text: words, score: 3 },
		],
	},
	{ ...base, key: "cut", type: "number", unitFamily: "count" },
	{ ...base, key: "dead", type: "number", unitFamily: "count" },
];
const trees = { known: "bearing_trees" } as const;
const measure = (numerator: Measure["numerator"], more: Partial<Measure> = {}): Measure => ({
	key: "measure",
	kind: "ratio",
	label: words,
	description: words,
	unit: "percent",
	decimals: 0,
	worse: null,
	hue: "pests",
	numerator,
	denominator: { terms: [{ ...trees, times: 1 }] },
	scale: 100,
	acrossCrops: true,
	base: false,
	...more,
});
const plantings = [
	{ plantingId: "p1", cropKey: "apple", bearingTrees: 100 },
	{ plantingId: "p2", cropKey: "apple", bearingTrees: 300 },
	{ plantingId: "p3", cropKey: "plum", bearingTrees: 50 },
];
const given = (plantingId: string, questionKey: string, value: Answer["value"]): Answer => ({
	questionKey,
	plantingId,
	kind: "given",
	value,
	given: null,
});
const factOf = (
	of: Measure,
	answers: Answer[],
	cropKey = "apple",
	asked: SubmittedResponse["plantings"] = plantings,
) => {
	const screens = [{ key: "table", title: words, perPlanting: true, questions }];
	const form: FormDefinition = { key: "form", title: words, minutes: 1, screens, measures: [of] };
	const fact = factsOf(form, { plantings: asked, answers }).find((row) => row.cropKey === cropKey);
	return fact && [fact.y, fact.x];
};

describe("trees that are known", () => {
	const known = measure({ terms: [{ ...trees, times: 1 }] }, { kind: "total", denominator: null });
	test("are summed over the crop's plantings", () => {
		expect(factOf(known, [])).toEqual([400, 1]);
		expect(factOf(known, [], "all")).toEqual([450, 1]);
	});
	test("make no fact where what was sent in does not have them", () => {
		const without = plantings.map((planting) => ({ ...planting, bearingTrees: undefined }));
		expect(factOf(known, [], "apple", without)).toBeUndefined();
	});
});

describe("a share that each planting has", () => {
	const share = measure({ terms: [{ ...trees, times: 1, share: "scab_trees" }] });
	const there = [given("p1", "seen", ["scab"]), given("p2", "seen", ["scab"])];
	test("weighs the planting's own trees", () => {
		expect(factOf(share, [...there, given("p1", "scab_trees", 10), given("p2", "scab_trees", 50)])).toEqual([160, 400]);
	});
	test("is nothing where it was not asked", () => {
		expect(factOf(share, [given("p1", "seen", ["none"]), there[1]!, given("p2", "scab_trees", 50)])).toEqual([
			150, 400,
		]);
	});
	test("makes no fact where it is missing or not known", () => {
		expect(factOf(share, [...there, given("p2", "scab_trees", 50)])).toBeUndefined();
		const silent: Answer = {
			questionKey: "scab_trees",
			plantingId: "p1",
			kind: "dont_know",
			value: null,
			given: null,
		};
		expect(factOf(share, [...there, silent, given("p2", "scab_trees", 50)])).toBeUndefined();
		expect(factOf(share, [])).toBeUndefined();
	});
});

test("a rating counts as its score, and as nothing where it was not asked", () => {
	const severity = measure({ terms: [{ ...trees, times: 100, share: "scab_severity" }] });
	const answers = [
		given("p1", "seen", ["scab"]),
		given("p1", "scab_severity", "severe"),
		given("p2", "seen", ["none"]),
	];
	expect(factOf(severity, answers)).toEqual([300, 400]);
	expect(factOf(severity, [...answers.slice(0, 1), given("p1", "scab_severity", "gone"), answers[2]!])).toBeUndefined();
});

const cut = (plantingId: string, dead: number, of: number) => [
	given(plantingId, "dead", dead),
	given(plantingId, "cut", of),
];

describe("how many of how many", () => {
	const killed = measure({ terms: [{ ...trees, times: 1, share: { part: "dead", whole: "cut" } }] });
	test("weighs by trees, and not by how many were cut", () => {
		expect(factOf(killed, [...cut("p1", 10, 10), ...cut("p2", 50, 200)])).toEqual([100 + 75, 400]);
	});
	test("none of some is nothing, and some of none says nothing", () => {
		expect(factOf(killed, cut("p3", 0, 30), "plum")).toEqual([0, 50]);
		expect(factOf(killed, cut("p3", 3, 0), "plum")).toBeUndefined();
		expect(factOf(killed, cut("p3", 0, 0), "plum")).toBeUndefined();
		expect(factOf(killed, [given("p3", "dead", 3)], "plum")).toBeUndefined();
	});
});

test("a measure of some crops makes facts of those only", () => {
	const some = measure({ one: true }, { crops: ["plum"], acrossCrops: false, denominator: { one: true } });
	expect(factOf(some, [], "plum")).toEqual([1, 1]);
	expect(factOf(some, [], "apple")).toBeUndefined();
	expect(factOf(some, [], "all")).toBeUndefined();
});
