import { describe, expect, test } from "vitest";
import type { Question } from "./form.ts";
import { readStep, type StepValues } from "./step-fields.ts";
import type { Step } from "./steps.ts";

const words = { en: "Text", es: "Texto" };
const number = (
	key: string,
	unitFamily: Extract<Question, { type: "number" }>["unitFamily"],
	hardMax?: number,
): Question => ({
	key,
	type: "number",
	unitFamily,
	text: words,
	required: false,
	sensitive: false,
	limits: { hardMax, ...(unitFamily === "temperature" && { hardMin: -80 }) },
});
const questions = [
	number("picked", "mass", 1_000_000),
	number("sold", "mass"),
	number("land", "area"),
	number("coldest", "temperature", 120),
	number("rows", "length"),
];
const step: Step = {
	key: "planting-p1",
	screen: { key: "all", title: words, perPlanting: true, questions },
	planting: { plantingId: "p1", cropKey: "apple", cultivar: "", bearingTrees: 9, plantKind: "tree", bushelLb: 42 },
};
const settings = { season: 2031, today: "2031-10-20" };
const read = (values: StepValues, language: "en" | "es" = "en") => {
	const outcome = readStep(step, questions, values, { ...settings, language });
	if (!outcome.ok)
		return outcome.problems.map(({ field, code, detail }) => [field, code, ...Object.values(detail ?? {})]);
	return Object.fromEntries(outcome.answers.map(({ questionKey, value, given }) => [questionKey, { value, given }]));
};
describe("crates", () => {
	test("are kept in pounds, with what one of them holds", () => {
		expect(read({ picked: "40", picked_unit: "crate", picked_crate: "38.5 lb" })).toEqual({
			picked: { value: 1540, given: { text: "40", unit: "crate", crateLb: 38.5 } },
		});
		expect(read({ picked: "40 crates", picked_unit: "lb", picked_crate: "10 kg" })).toMatchObject({
			picked: { given: { unit: "crate", crateLb: 10 / 0.45359237 } },
		});
	});
	test("one weight does for the whole screen", () => {
		const values = { picked: "40", picked_unit: "crate", picked_crate: "38", sold: "10", sold_unit: "crate" };
		expect(read({ ...values, sold_crate: " " })).toMatchObject({ picked: { value: 1520 }, sold: { value: 380 } });
		expect(read({ ...values, sold_crate: "20" })).toMatchObject({ picked: { value: 1520 }, sold: { value: 200 } });
	});
	test.each([
		["", "empty"],
		["0", "too_small_limit", 0.1],
		["-5", "negative"],
		["heavy", "not_a_number"],
		["1 bu", "unit_unknown"],
		["3,001", "too_large_limit", 3000],
		["9".repeat(2_000_000), "too_long"],
	])("a crate of %.20j is asked back beside its own box", (crate, ...code) => {
		expect(read({ picked: "40", picked_unit: "crate", picked_crate: crate })).toEqual([["picked_crate", ...code]]);
	});
	test("what one holds matters only where the answer is in crates", () => {
		expect(read({ picked: "40", picked_unit: "lb", picked_crate: "heavy" })).toMatchObject({ picked: { value: 40 } });
	});
	test("a limit is told in crates", () => {
		const values = { picked: "25,001", picked_unit: "crate", picked_crate: "40" };
		expect(read(values)).toEqual([["picked", "too_large_limit", 25_000]]);
	});
});

describe("temperatures", () => {
	test.each([
		["27.5", "fahrenheit", 27.5],
		["-3", "fahrenheit", -3],
		["-2.3", "celsius", 27.86],
		["−2.3 °C", "fahrenheit", 27.86],
		["-2.3º", "celsius", 27.86],
		["0", "celsius", 32],
	])("%j with %s chosen is %d degrees Fahrenheit", (coldest, coldest_unit, value) => {
		expect(read({ coldest, coldest_unit })).toMatchObject({ coldest: { value: expect.closeTo(value, 10) } });
	});
	test("a limit is told in the degrees that were used", () => {
		expect(read({ coldest: "-90", coldest_unit: "celsius" })).toEqual([["coldest", "too_small_limit", -62.222]]);
		expect(read({ coldest: "121", coldest_unit: "fahrenheit" })).toEqual([["coldest", "too_large_limit", 120]]);
	});
	test("nothing else goes below zero, and no other unit or sign is a temperature", () => {
		expect(read({ land: "-3", land_unit: "acre" })).toEqual([["land", "negative"]]);
		expect(read({ coldest: "27 lb", coldest_unit: "celsius" })).toEqual([["coldest", "unit_unknown"]]);
		expect(read({ coldest: "27%", coldest_unit: "celsius" })).toEqual([["coldest", "unit_unknown"]]);
		expect(read({ picked: "40°", picked_unit: "lb" })).toEqual([["picked", "unit_unknown"]]);
	});
});

describe("other units", () => {
	test("an area in hectares, a row in metres, a weight in pecks", () => {
		const kept = read({ land: "2 ha", land_unit: "acre", rows: "300", rows_unit: "m", picked: "4 pecks" });
		expect(kept).toMatchObject({
			land: { given: { unit: "ha" } },
			rows: { given: { unit: "m" } },
			picked: { value: 42 },
		});
		expect((kept as Record<string, { value: number }>).land!.value).toBeCloseTo(4.9421076, 6);
		expect((kept as Record<string, { value: number }>).rows!.value).toBeCloseTo(984.251969, 5);
	});
	test("a unit of another family is asked back, typed or chosen", () => {
		expect(read({ land: "2 lb", land_unit: "acre" })).toEqual([["land", "unit_unknown"]]);
		expect(read({ land: "2", land_unit: "lb" })).toEqual([["land", "unit_unknown"]]);
		expect(read({ picked: "40 trees", picked_unit: "lb" })).toEqual([["picked", "unit_unknown"]]);
	});
});
