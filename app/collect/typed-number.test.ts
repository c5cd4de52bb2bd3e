import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parseTypedNumber, writeNumber } from "./typed-number.ts";

const read = (typed: string, language = "en") => {
	const result = parseTypedNumber(typed, language);
	return result.ok ? [result.value, result.unit] : result.code;
};

describe("what growers type, in either language", () => {
	test.each([
		["40", 40, null],
		["  40  ", 40, null],
		["0", 0, null],
		["-0", 0, null],
		["12.5", 12.5, null],
		[".5", 0.5, null],
		["5.", 5, null],
		["0.125", 0.125, null],
		["1,234", 1234, null],
		["12,345,678", 12_345_678, null],
		["1,234.5", 1234.5, null],
		["1.234,5", 1234.5, null],
		["1.234.567", 1_234_567, null],
		["1 234 567", 1_234_567, null],
		["1 234.5", 1234.5, null],
		["$1,200", 1200, null],
		["12.5 bu", 12.5, "bu"],
		["12.5bu.", 12.5, "bu"],
		["1,200 lbs", 1200, "lb"],
		["1200#", 1200, "lb"],
		["3 tons", 3, "ton"],
		["300 Kilos", 300, "kg"],
		["500 libras", 500, "lb"],
		["40 trees", 40, "plants"],
		["40 árboles", 40, "plants"],
		["30%", 30, "percent"],
		["30 %", 30, "percent"],
		["40 half-bushels", 40, "half_bu"],
		["40 medios bushels", 40, "half_bu"],
		["7 pecks", 7, "peck"],
		["120 qt.", 120, "dry_qt"],
		["35 cajas", 35, "crate"],
		["3 short tons", 3, "ton"],
		["2.5 acres", 2.5, "acre"],
		["1.2 ha", 1.2, "ha"],
		["900 row feet", 900, "ft"],
		["300 metros", 300, "m"],
		["27 °F", 27, "fahrenheit"],
		["27°", 27, "degrees"],
		["3 º C", 3, "celsius"],
		["27 degrees F", 27, "fahrenheit"],
	])("%j is read", (typed, value, unit) => {
		expect(read(typed, "en")).toEqual([value, unit]);
		expect(read(typed, "es")).toEqual([value, unit]);
	});
});

describe("what could be two numbers", () => {
	test("a decimal comma is asked back in English and understood in Spanish", () => {
		expect(read("12,5 bu", "en")).toBe("number_unclear");
		expect(read("12,5 bu", "es")).toEqual([12.5, "bu"]);
		expect(read("0,125", "en")).toBe("number_unclear");
		expect(read("0,125", "es")).toEqual([0.125, null]);
	});
	test("a point before three figures is asked back in both", () => {
		expect(read("1.234", "en")).toBe("number_unclear");
		expect(read("1.234", "es")).toBe("number_unclear");
	});
	test("a metric or local weight is asked back", () => {
		expect(read("3 toneladas", "es")).toBe("unit_unclear");
		expect(read("3 t", "en")).toBe("unit_unclear");
		expect(read("3 quintales", "es")).toBe("unit_unclear");
		expect(read("3 cuartos", "es")).toBe("unit_unclear");
	});
});

describe("what is no number to store", () => {
	test.each([
		["-5", "negative"],
		["−5", "negative"],
		["- 5 bu", "negative"],
		["", "not_a_number"],
		["forty", "not_a_number"],
		["40-50", "not_a_number"],
		["12 5", "not_a_number"],
		["1,23,456", "not_a_number"],
		["1.2.3", "not_a_number"],
		["1e9", "not_a_number"],
		["1²", "not_a_number"],
		["1/2", "not_a_number"],
		["NaN", "not_a_number"],
		["Infinity", "not_a_number"],
		["40 bins", "unit_not_known"],
		["40 lb kg", "unit_not_known"],
		["<b>40</b>", "not_a_number"],
		["4".repeat(61), "too_long"],
		["x".repeat(2_000_000), "too_long"],
	])("%.20s gives %s", (typed, code) => expect(read(typed)).toBe(code));
});

const below = (typed: string) => {
	const result = parseTypedNumber(typed, "en", { belowZero: true });
	return result.ok ? [result.value, result.unit] : result.code;
};

describe("below zero", () => {
	test("is read where it may be", () => {
		expect(below("-3.5 °C")).toEqual([-3.5, "celsius"]);
		expect(below("−4")).toEqual([-4, null]);
		expect(below("-1,234.5")).toEqual([-1234.5, null]);
		expect(below("27-30")).toBe("not_a_number");
	});
	test("a zero has no sign", () => {
		expect(Object.is((below("-0") as [number, null])[0], 0)).toBe(true);
	});
});

test("what the boxes write is read back in both languages", () => {
	expect(writeNumber(12.345)).toBe("12.3450");
	const numbers = fc.oneof(
		fc.double({ min: -1e9, max: 1e9, noNaN: true }),
		fc.integer({ min: -1e9, max: 1e9 }).map((thousandths) => thousandths / 1000),
	);
	fc.assert(
		fc.property(numbers, fc.constantFrom("en", "es"), (number, language) => {
			const result = parseTypedNumber(writeNumber(number), language, { belowZero: true });
			expect(result.ok && Math.abs(result.value - number)).toBeLessThanOrEqual(1e-12 + 1e-12 * Math.abs(number));
		}),
	);
});

test("a number written by the product's own formatter is read back as it was", () => {
	fc.assert(
		fc.property(fc.integer({ min: 0, max: 2_000_000_000 }), fc.constantFrom("en-US", "es-US"), (whole, locale) => {
			const shown = new Intl.NumberFormat(locale).format(whole);
			expect(read(shown, locale.slice(0, 2))).toEqual([whole, null]);
		}),
	);
});

test("whatever is typed gives a finite number from 0 or a code", () => {
	fc.assert(
		fc.property(fc.string({ unit: "grapheme" }), fc.constantFrom("en", "es"), (typed, language) => {
			const result = parseTypedNumber(typed, language);
			if (result.ok) expect(Number.isFinite(result.value) && result.value >= 0).toBe(true);
			else expect(result.code).toMatch(/^[a-z_]+$/);
		}),
	);
});
