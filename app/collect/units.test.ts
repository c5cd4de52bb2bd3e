import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { crops } from "#app/directory/crops.ts";
import {
	canonicalUnit,
	fromCanonical,
	isMassUnit,
	toCanonical,
	type Unit,
	type UnitFamily,
	unitGiven,
	unitsFor,
} from "./units.ts";

const none = { bushelLb: null, crateLb: null };
const families = ["mass", "area", "temperature", "length"] as const;

describe("sizes of units", () => {
	test.each<[number, Unit, number]>([
		// NIST Handbook 44, appendix C, to ten figures (from memory): pounds in a kilogram, acres in a hectare.
		[1, "kg", 2.204622622],
		[1, "ha", 2.471053815],
		[1, "m", 3.280839895],
		[1.5, "ton", 3000],
		[-40, "celsius", -40],
		[100, "celsius", 212],
		[-2.3, "celsius", 27.86],
		[27.5, "fahrenheit", 27.5],
	])("%d %s is %d in the unit that is kept", (amount, unit, value) => {
		expect(toCanonical(amount, unit, none)).toBeCloseTo(value, 9);
	});

	test("a bushel is the crop's, and holds two halves, four pecks and 32 dry quarts", () => {
		for (const { bushelLb } of crops.filter((crop) => crop.bushelLb !== null)) {
			const sizes = { bushelLb, crateLb: null };
			expect(toCanonical(1, "bu", sizes)).toBe(bushelLb);
			expect(toCanonical(2, "half_bu", sizes)).toBe(bushelLb);
			expect(toCanonical(4, "peck", sizes)).toBe(bushelLb);
			expect(toCanonical(32, "dry_qt", sizes)).toBe(bushelLb);
		}
		expect(toCanonical(12.5, "bu", { bushelLb: 42, crateLb: null })).toBe(525);
	});

	test("a crate is the grower's own", () => {
		expect(toCanonical(35, "crate", { bushelLb: 42, crateLb: 38.5 })).toBe(1347.5);
		expect(() => toCanonical(35, "crate", { bushelLb: 42, crateLb: null })).toThrow(RangeError);
	});
});

describe("what is offered", () => {
	test("a bushel and its parts only where the crop has one", () => {
		expect(unitsFor("mass", 42)).toEqual(["lb", "bu", "half_bu", "peck", "dry_qt", "crate", "ton", "kg"]);
		expect(unitsFor("mass", null)).toEqual(["lb", "crate", "ton", "kg"]);
		for (const unit of ["bu", "half_bu", "peck", "dry_qt"] as const)
			expect(() => toCanonical(1, unit, none)).toThrow(RangeError);
		expect(isMassUnit("bin")).toBe(false);
		expect(isMassUnit("acre")).toBe(false);
	});
	test("the unit that is kept comes first", () => {
		expect(families.map((family) => unitsFor(family, null)[0])).toEqual(["lb", "acre", "fahrenheit", "ft"]);
		expect(families.map(canonicalUnit)).toEqual(["lb", "acre", "fahrenheit", "ft"]);
	});
	test("an answer whose unit has lost its size is told as it is kept", () => {
		expect(unitGiven({ text: "4", unit: "peck" }, "mass", 42)).toBe("peck");
		expect(unitGiven({ text: "4", unit: "peck" }, "mass", null)).toBe("lb");
		expect(unitGiven({ text: "4", unit: "crate" }, "mass", 42)).toBe("lb");
		expect(unitGiven({ text: "4", unit: "crate", crateLb: 38 }, "mass", 42)).toBe("crate");
		expect(unitGiven(null, "temperature", null)).toBe("fahrenheit");
	});
});

test("an amount in any unit comes back from what is kept as it was", () => {
	const units = families.flatMap((family) => unitsFor(family, 42).map((unit): [UnitFamily, Unit] => [family, unit]));
	const size = fc.double({ min: 1, max: 3000, noNaN: true });
	fc.assert(
		fc.property(
			fc.double({ min: -1e9, max: 1e9, noNaN: true }),
			fc.constantFrom(...units),
			size,
			size,
			(typed, [family, unit], bushelLb, crateLb) => {
				const amount = family === "temperature" ? typed : Math.abs(typed);
				const sizes = { bushelLb, crateLb };
				const back = fromCanonical(toCanonical(amount, unit, sizes), unit, sizes);
				// Near 0 degrees Celsius it is the 32 of Fahrenheit that the error is relative to.
				const scale = unit === "celsius" ? Math.max(Math.abs(amount), 32) : Math.abs(amount);
				expect(Math.abs(back - amount)).toBeLessThanOrEqual(1e-12 * scale + 1e-300);
			},
		),
	);
});
