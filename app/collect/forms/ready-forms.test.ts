import { describe, expect, test } from "vitest";
import { cropKeys } from "#app/directory/crops.ts";
import { checksOf } from "#app/collect/checks.ts";
import { quantityOf } from "#app/collect/base-quantities.ts";
import { FormDefinition, type Measure, type Question } from "#app/collect/form.ts";
import { listAsked, type PlantingAsked } from "#app/collect/steps.ts";
import { pests as pestList } from "./pest-list.ts";
import { readyFormKeys, readyForms } from "./ready-forms.ts";

const forms = readyFormKeys.map((key): [string, FormDefinition] => [key, readyForms[key]]);
const plantings = cropKeys.map((cropKey): PlantingAsked => ({
	plantingId: cropKey,
	cropKey,
	cultivar: "",
	bearingTrees: 40,
	plantKind: "tree",
	bushelLb: null,
}));
const questionsOf = (form: FormDefinition) => form.screens.flatMap((screen) => screen.questions);

const helpOf = (form: FormDefinition, key: string) => questionsOf(form).find((one) => one.key === key)?.help;

test("there are four forms, each under its own key", () => {
	expect(forms.map(([key]) => key)).toEqual(["bloom_watch", "after_freeze", "pests", "after_harvest"]);
	for (const [key, form] of forms) expect(form.key).toBe(key);
});

describe.each(forms)("the form %s", (_key, form) => {
	test("has no fault, and is stored as it is written", () => {
		const parsed = FormDefinition.parse(form);
		expect(JSON.parse(JSON.stringify(parsed))).toEqual(JSON.parse(JSON.stringify(form)));
	});

	test("asks short questions, with no more than one help text that is long", () => {
		for (const question of questionsOf(form)) {
			expect(question.text.en.length).toBeLessThanOrEqual(90);
			expect(question.text.es.length).toBeLessThanOrEqual(110);
		}
		const long = questionsOf(form).filter(({ help }) => help && help.en.length > 130);
		expect(new Set(long.map(({ help }) => help?.en)).size).toBeLessThanOrEqual(1);
	});

	test("says each text in both languages", () => {
		const texts = JSON.stringify(form).match(/\{"en":"(?:[^"\\]|\\.)*","es":"(?:[^"\\]|\\.)*"\}/g) ?? [];
		expect(texts.length).toBeGreaterThan(20);
		for (const text of texts) {
			const { en, es } = JSON.parse(text) as { en: string; es: string };
			expect([en, es].filter((one) => one.trim() === "")).toEqual([]);
			// What is short can be one word in both; a sentence cannot.
			if (en.length > 12) expect(es).not.toBe(en);
		}
	});

	test("calls each question by a noun, for sentences about it", () => {
		const asked = questionsOf(form).filter(({ text }) => text.en.includes("?"));
		expect(asked.filter(({ label }) => !label).map(({ key }: Question) => key)).toEqual([]);
	});

	test("asks each planting something, and ends with a note", () => {
		const steps = listAsked(form, plantings, []);
		// Before anything is answered: a screen or two for each planting, and a few for all together.
		expect(steps.length).toBeLessThanOrEqual(plantings.length + 4);
		for (const { plantingId } of plantings)
			expect(steps.some(({ step }) => step.planting?.plantingId === plantingId)).toBe(true);
		expect(steps.at(-1)?.questions.at(-1)?.key).toBe("comment");
	});

	test("has checks, and the base quantities that its cells add up in", () => {
		expect(form.screens.flatMap(checksOf).length).toBeGreaterThan(0);
		const base = form.measures.filter((measure) => measure.base);
		expect(base.map(({ key }) => key)).toContain("base.bearing_trees");
		expect(form.measures.length).toBeGreaterThan(base.length);
	});
});

/** The quantities by which answers are summed in a measure, before any share of them is taken. */
function amountsOf({ numerator, denominator }: Measure): string[] {
	const terms = [numerator, denominator].flatMap((quantity) => (quantity && "terms" in quantity ? quantity.terms : []));
	return terms.map((term) => ("question" in term ? term.question : term.known));
}

test.each(forms)("each figure of the form %s names the base quantities that its sums are of", (_key, form) => {
	const bases = form.measures.filter(({ base }) => base);
	// A base of one plain amount is that amount's; one with a share is its own, for measures with the same numerator.
	const plain = new Map(
		bases.flatMap((base) => {
			const isPlain = "terms" in base.numerator && base.numerator.terms.every(({ share }) => share === undefined);
			return isPlain ? [[amountsOf(base).join("+"), quantityOf(base.key)] as const] : [];
		}),
	);
	for (const measure of form.measures.filter(({ base }) => !base)) {
		const same = bases.filter(({ numerator }) => JSON.stringify(numerator) === JSON.stringify(measure.numerator));
		// Nothing that growers hold in different amounts is summed without a quantity that the table guards.
		const guarded = amountsOf(measure).map((amount) => plain.get(amount) ?? `nothing guards ${amount}`);
		const made = new Set([...guarded, ...same.map(({ key }) => quantityOf(key))]);
		expect([...(measure.protects ?? [])].toSorted(), measure.key).toEqual([...made].toSorted());
	}
});

test.each(forms)(
	"each share of the form %s has the interval of a share, which stays between 0 and 100 percent",
	(_key, form) => {
		const percents = form.measures.filter(({ unit }) => unit === "percent");
		expect(percents.length).toBeGreaterThan(0);
		// A loss alone can be below 0, where a crop was above normal.
		const others = percents.filter(({ kind }) => kind !== "proportion").map(({ key }) => key);
		expect(others).toEqual(form.key === "after_harvest" ? ["crop_loss"] : []);
	},
);

test("each crop has pests of its own to tell of, and each pest is asked about where it is offered", () => {
	for (const cropKey of cropKeys)
		expect(pestList.filter(({ crops }) => crops.includes(cropKey)).length).toBeGreaterThan(0);
	const form = readyForms.pests;
	for (const { key, crops } of pestList) {
		expect(form.measures.filter((measure) => measure.crops?.join() === crops.join()).map((one) => one.key)).toEqual(
			expect.arrayContaining([`${key}_seen`, `${key}_trees`, `${key}_severity`, `${key}_fruit`]),
		);
		expect(form.screens.some((screen) => screen.key === key)).toBe(true);
	}
});

test("where spraying, spoiled fruit or cold nights are spoken of, a caution stands beside", () => {
	expect(helpOf(readyForms.pests, "seen")).toMatchObject({
		en: expect.stringMatching(/label.*license.*local extension/),
		es: expect.stringMatching(/etiqueta.*licencia.*extensión/),
	});
	expect(helpOf(readyForms.pests, "scab_fruit")?.en).toContain("make people sick");
	expect(helpOf(readyForms.after_freeze, "protection")?.en).toMatch(/hurt people.*extension office/);
});
