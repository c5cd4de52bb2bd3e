import * as fc from "fast-check";
import { expect, test } from "vitest";
import { fromPounds, isMassUnit, massUnits, massUnitsFor, poundsPer, toPounds } from "./units.ts";

test("a kilogram is 2.20462262185 lb", () => {
	// NIST Handbook 44 appendix C: 1 kg = 2.204 622 622 lb to ten figures (from memory).
	expect(poundsPer("kg", null)).toBeCloseTo(2.204622622, 9);
});

test("a ton is the short ton and a bushel is the crop's", () => {
	expect(toPounds(1.5, "ton", null)).toBe(3000);
	expect(toPounds(12.5, "bu", 42)).toBe(525);
});

test("a bushel is offered only where the crop has one", () => {
	expect(massUnitsFor(42)).toEqual(["lb", "bu", "ton", "kg"]);
	expect(massUnitsFor(null)).toEqual(["lb", "ton", "kg"]);
	expect(() => toPounds(1, "bu", null)).toThrow(RangeError);
	expect(isMassUnit("bin")).toBe(false);
});

test("an amount in any unit comes back from pounds as it was", () => {
	fc.assert(
		fc.property(
			fc.double({ min: 0, max: 1e9, noNaN: true }),
			fc.constantFrom(...massUnits),
			fc.double({ min: 20, max: 80, noNaN: true }),
			(amount, unit, bushelLb) => {
				const back = fromPounds(toPounds(amount, unit, bushelLb), unit, bushelLb);
				expect(Math.abs(back - amount)).toBeLessThanOrEqual(1e-12 * amount + Number.MIN_VALUE);
			},
		),
	);
});
