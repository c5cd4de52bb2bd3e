import { describe, expect, test } from "vitest";
import { factsOf } from "#app/tally/facts.ts";
import { withDefaultMeasures } from "./default-measures.ts";
import { type Answer, FormDefinition, type Question } from "./form.ts";
import { readyForms } from "./forms/ready-forms.ts";

const words = (en: string, es: string) => ({ en, es });
const base = { required: false, sensitive: false };
const once: Question[] = [
	{ ...base, key: "hives", type: "number", unitFamily: "count", text: words("How many hives?", "¿Cuántas colmenas?") },
	{ ...base, key: "coldest", type: "number", unitFamily: "temperature", text: words("How cold?", "¿Cuánto frío?") },
	{ ...base, key: "sold", type: "percent", text: words("What share did you sell?", "¿Qué parte vendió?") },
	{
		...base,
		key: "buyer",
		type: "choice",
		text: words("Who bought most of it?", "¿Quién compró la mayor parte?"),
		label: words("Main buyer", "Comprador principal"),
		options: [
			{ key: "market", text: words("A market", "Un mercado") },
			{ key: "cider", text: words("A cider maker", "Una sidrería") },
		],
	},
	{
		...base,
		key: "first_sale",
		type: "date",
		text: words("When did you first sell?", "¿Cuándo vendió por primera vez?"),
	},
	{ ...base, key: "note", type: "long_text", maxLength: 500, text: words("Anything else?", "¿Algo más?") },
];
const each: Question[] = [
	{ ...base, key: "picked", type: "number", unitFamily: "mass", text: words("How much?", "¿Cuánto?") },
	{ ...base, key: "low", type: "number", unitFamily: "temperature", text: words("How cold?", "¿Cuánto frío?") },
	{ ...base, key: "russet", type: "percent", text: words("What share was russeted?", "¿Qué parte tuvo ruginosidad?") },
];
const screen = (key: string, perPlanting: boolean, questions: Question[]) => ({
	key,
	title: words("Screen", "Pantalla"),
	perPlanting,
	questions,
});
const own = withDefaultMeasures({
	key: "own_form",
	title: words("Sales", "Ventas"),
	minutes: 2,
	screens: [screen("each", true, each), screen("once", false, once)],
	measures: [],
});
const measureOf = (key: string) => own.measures.find((measure) => measure.key === key);

const answer = (questionKey: string, value: Answer["value"], plantingId: string | null = null): Answer => ({
	questionKey,
	plantingId,
	kind: "given",
	value,
	given: null,
});
const faults = (measure: object) =>
	FormDefinition.safeParse({ ...own, measures: [measure] }).error?.issues.map(({ message }) => message);

describe("an associate's own questions", () => {
	test("make a form without a fault, with measures where they can be counted", () => {
		expect(FormDefinition.safeParse(own).error).toBeUndefined();
		expect(own.measures.map(({ key, kind, unit }) => `${key} ${kind} ${unit}`)).toEqual([
			"picked mean lb",
			"base.picked total lb",
			"russet proportion percent",
			"base.russet_trees total trees",
			"base.bearing_trees total trees",
			"hives mean count",
			"base.hives total count",
			"coldest mean fahrenheit",
			"sold proportion percent",
			"buyer_market proportion percent",
			"buyer_cider proportion percent",
			"first_sale day day",
		]);
	});
	test("give their measures their own words in both languages", () => {
		expect(measureOf("buyer_cider")?.label).toEqual(
			words("Main buyer: A cider maker", "Comprador principal: Una sidrería"),
		);
		expect(measureOf("hives")?.label).toEqual(words("How many hives?", "¿Cuántas colmenas?"));
	});
	test("are counted as they are answered", () => {
		const facts = factsOf(own, {
			plantings: [
				{ plantingId: "a", cropKey: "apple", bearingTrees: 100 },
				{ plantingId: "b", cropKey: "apple", bearingTrees: 300 },
			],
			answers: [
				answer("picked", 500, "a"),
				answer("picked", 700, "b"),
				answer("russet", 50, "a"),
				answer("russet", 10, "b"),
				answer("hives", 4),
				answer("coldest", 24.5),
				answer("sold", 80),
				answer("buyer", "cider"),
				answer("first_sale", "2026-05-04"),
			],
		});
		const told = Object.fromEntries(
			facts.filter(({ cropKey }) => cropKey === "apple").map(({ measureKey, y, x }) => [measureKey, [y, x]]),
		);
		expect(told).toEqual({
			picked: [1200, 1],
			"base.picked": [1200, 1],
			russet: [80, 400],
			"base.russet_trees": [80, 1],
			"base.bearing_trees": [400, 1],
			hives: [4, 1],
			"base.hives": [4, 1],
			coldest: [24.5, 1],
			sold: [0.8, 1],
			buyer_market: [0, 1],
			buyer_cider: [1, 1],
			first_sale: [124, 1],
		});
	});
});

test("a question that a measure of the form names keeps that measure alone", () => {
	const form = withDefaultMeasures(readyForms.after_harvest);
	const keys = form.measures.map(({ key }) => key);
	expect(keys).not.toContain("harvested");
	expect(keys).toEqual(expect.arrayContaining(["crop_loss", "cause_disease", "first_harvest", "bud_set_light"]));
	expect(withDefaultMeasures(form)).toEqual(form);
});

test.each(Object.entries(readyForms))("%s with the default measures has no fault", (_key, form) => {
	expect(FormDefinition.safeParse(withDefaultMeasures(form)).error).toBeUndefined();
});

test("a measure made of what is no base quantity of its form is a fault", () => {
	const hives = measureOf("hives");
	const parsed = FormDefinition.safeParse({ ...own, measures: [hives] });
	expect(parsed.error?.issues.map(({ message }) => message)).toEqual([
		'measure "hives" is made of "hives", which is no base quantity of the form',
	]);
});

test("a measure of days takes its day from a date and nothing else", () => {
	const day = measureOf("first_sale")!;
	expect(faults({ ...day, numerator: { day: "sold" } })).toEqual([
		'measure "first_sale" takes its day from "sold", which is no date question',
	]);
	expect(faults({ ...day, kind: "mean" })).toHaveLength(1);
	expect(faults({ ...day, denominator: null })).toContain(
		'measure "first_sale" is one of days, and has another denominator than one',
	);
});
