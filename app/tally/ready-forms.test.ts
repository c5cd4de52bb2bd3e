import { describe, expect, test } from "vitest";
import type { Answer, FormDefinition } from "#app/collect/form.ts";
import { readyForms } from "#app/collect/forms/ready-forms.ts";
import { factsOf } from "./facts.ts";

const plantings = [
	{ plantingId: "a1", cropKey: "apple", bearingTrees: 100 },
	{ plantingId: "a2", cropKey: "apple", bearingTrees: 300 },
	{ plantingId: "c1", cropKey: "tart_cherry", bearingTrees: 60 },
	{ plantingId: "h1", cropKey: "hazelnut", bearingTrees: 40 },
	{ plantingId: "p1", cropKey: "pawpaw", bearingTrees: 10 },
];
type Told = Record<string, Answer["value"]>;
/** Answers from what is told once and what is told of each planting. */
const answersOf = (once: Told, each: Record<string, Told>): Answer[] =>
	[[null, once] as const, ...Object.entries(each)].flatMap(([plantingId, told]) =>
		Object.entries(told).map(([questionKey, value]): Answer => ({
			questionKey,
			plantingId,
			kind: "given",
			value,
			given: null,
		})),
	);
const factsIn = (form: FormDefinition, answers: Answer[]) =>
	new Map(
		factsOf(form, { plantings, answers }).map(({ measureKey, cropKey, y, x }) => [`${measureKey} ${cropKey}`, [y, x]]),
	);
/** The facts that a form's measures should all have: of each crop that a measure is told of, and of all where it says so. */
const allOf = (form: FormDefinition) =>
	form.measures.flatMap(({ key, crops, acrossCrops }) => [
		...["apple", "tart_cherry", "hazelnut", "pawpaw"]
			.filter((crop) => crops?.includes(crop) ?? true)
			.map((crop) => `${key} ${crop}`),
		...(acrossCrops ? [`${key} all`] : []),
	]);

describe("bloom watch", () => {
	const form = readyForms.bloom_watch;
	const density = { a1: "light", a2: "heavy", c1: "none", h1: "normal", p1: "normal" };
	const each = Object.fromEntries(Object.entries(density).map(([id, value]) => [id, { bloom_density: value }]));
	const days: Record<string, Told> = {
		a1: { first_bloom: "2024-05-03", full_bloom: "2024-05-07", petal_fall: "2024-05-16" },
		a2: { first_bloom: "2024-04-30", full_bloom: "2024-05-08", petal_fall: "2024-05-14" },
	};
	const withDays = Object.fromEntries(
		Object.entries(each).map(([id, told]) => [id, { ...told, ...(days[id] ?? days.a1) }]),
	);
	const facts = factsIn(form, answersOf({ bee_weather: "poor" }, each));

	test("every measure has its facts", () => {
		const all = factsIn(form, answersOf({ bee_weather: "poor" }, withDays));
		expect([...all.keys()].toSorted()).toEqual(allOf(form).toSorted());
	});
	test("bloom begins with a crop's first planting and ends with its last, in days of a leap year", () => {
		const all = factsIn(form, answersOf({}, withDays));
		expect(all.get("first_bloom apple")).toEqual([121, 1]);
		expect(all.get("full_bloom apple")).toEqual([128, 1]);
		expect(all.get("petal_fall apple")).toEqual([137, 1]);
		expect(all.has("first_bloom all")).toBe(false);
		const some = factsIn(form, answersOf({}, { ...withDays, a2: each.a2! }));
		expect(some.has("first_bloom apple")).toBe(false);
		expect(some.get("first_bloom pawpaw")).toEqual([124, 1]);
	});
	test("trees of plantings with less bloom, of all trees", () => {
		expect(facts.get("light_bloom apple")).toEqual([100, 400]);
		expect(facts.get("light_bloom tart_cherry")).toEqual([60, 60]);
		expect(facts.get("light_bloom all")).toEqual([160, 510]);
		expect(facts.get("base.light_bloom_trees all")).toEqual([160, 1]);
		expect(facts.get("base.bearing_trees hazelnut")).toEqual([40, 1]);
	});
	test("bad days for bees count the operation once", () => {
		expect(facts.get("poor_bee_weather all")).toEqual([1, 1]);
		expect(factsIn(form, answersOf({ bee_weather: "mixed" }, each)).get("poor_bee_weather apple")).toEqual([0, 1]);
		expect(factsIn(form, answersOf({}, each)).has("poor_bee_weather apple")).toBe(false);
	});
});

const cut = (dead: number, of: number): Told => ({ buds_cut: of, buds_dead: dead });

describe("after a freeze", () => {
	const form = readyForms.after_freeze;
	const each = { a1: cut(5, 50), a2: cut(100, 100), c1: cut(0, 80), h1: cut(2, 4), p1: cut(10, 10) };
	const facts = factsIn(form, answersOf({ coldest: 24.5, hours_below: 5, protection: ["fans", "water"] }, each));

	test("every measure has its facts", () => expect([...facts.keys()].toSorted()).toEqual(allOf(form).toSorted()));
	test("plantings weigh by their trees, however many buds were cut", () => {
		expect(facts.get("killed_bloom apple")).toEqual([10 + 300, 400]);
		expect(facts.get("killed_bloom tart_cherry")).toEqual([0, 60]);
		expect(facts.get("killed_bloom all")).toEqual([10 + 300 + 0 + 20 + 10, 510]);
		expect(facts.get("base.killed_trees apple")).toEqual([310, 1]);
	});
	test("a crop of which no bud was cut tells nothing of buds", () => {
		const none = factsIn(form, answersOf({ protection: ["none"] }, { ...each, p1: { buds_cut: 0 } }));
		expect(none.has("killed_bloom pawpaw")).toBe(false);
		expect(none.get("killed_bloom apple")).toEqual([310, 400]);
		expect(none.get("protected pawpaw")).toEqual([0, 1]);
	});
	test("protection is anything but nothing", () => expect(facts.get("protected all")).toEqual([1, 1]));
});

const had = (pest: string, trees: number, severity: string, fruit: string): Told => ({
	[`${pest}_trees`]: trees,
	[`${pest}_severity`]: severity,
	[`${pest}_fruit`]: fruit,
});

describe("pests and diseases", () => {
	const form = readyForms.pests;
	const each: Record<string, Told> = {
		a1: {
			seen: ["scab", "japanese_beetle"],
			...had("scab", 50, "severe", "marked"),
			...had("japanese_beetle", 1, "light", "no"),
		},
		a2: { seen: ["scab"], ...had("scab", 10, "moderate", "no") },
		c1: { seen: ["brown_rot"], ...had("brown_rot", 100, "light", "spoiled") },
		h1: { seen: ["none"] },
		p1: { seen: ["none"] },
	};
	const facts = factsIn(form, answersOf({}, each));

	test("every measure has its facts, of the crops that its pest is looked for on", () => {
		const here = new Set(["apple", "tart_cherry", "hazelnut", "pawpaw", "all"]);
		expect([...facts.keys()].toSorted()).toEqual(allOf(form).toSorted());
		expect(allOf(form).every((key) => here.has(key.split(" ")[1]!))).toBe(true);
		expect(facts.has("scab_seen tart_cherry")).toBe(false);
	});
	test("seen counts the operation, trees and severity weigh the plantings", () => {
		expect(facts.get("scab_seen apple")).toEqual([1, 1]);
		expect(facts.get("scab_trees apple")).toEqual([50 + 30, 400]);
		expect(facts.get("scab_severity apple")).toEqual([300 + 600, 400]);
		expect(facts.get("scab_fruit apple")).toEqual([1, 1]);
	});
	test("what was not seen is nothing, where it was looked for", () => {
		expect(facts.get("fire_blight_seen apple")).toEqual([0, 1]);
		expect(facts.get("fire_blight_trees apple")).toEqual([0, 400]);
		expect(facts.get("nut_weevil_severity hazelnut")).toEqual([0, 40]);
		expect(facts.get("japanese_beetle_trees apple")).toEqual([1, 400]);
		expect(facts.get("japanese_beetle_fruit apple")).toEqual([0, 1]);
		expect(facts.get("brown_rot_fruit tart_cherry")).toEqual([1, 1]);
	});
	test("who does not know what was there tells of no pest", () => {
		const unsure = answersOf({}, { ...each, a1: {} });
		unsure.push({ questionKey: "seen", plantingId: "a1", kind: "dont_know", value: null, given: null });
		const told = factsIn(form, unsure);
		expect(told.has("scab_trees apple")).toBe(false);
		expect(told.has("fire_blight_seen apple")).toBe(false);
		expect(told.get("scab_seen apple")).toEqual([1, 1]);
		expect(told.get("brown_rot_trees tart_cherry")).toEqual([60, 60]);
	});
});

test("after harvest: every measure has its facts", () => {
	const form = readyForms.after_harvest;
	const days = { first_harvest: "2031-09-01", last_harvest: "2031-10-01" };
	const planting = { bearing_trees: 40, normal_crop: 4000, harvested: 1000 };
	const each = Object.fromEntries(plantings.map(({ plantingId }) => [plantingId, planting]));
	const facts = factsIn(form, answersOf({ cause_freeze: 100, ...days }, each));
	expect([...facts.keys()].toSorted()).toEqual(allOf(form).toSorted());
});
