import { expect, test } from "vitest";
import { unitSlip } from "#app/review/unit-slip.ts";

test.each([
	[1 / 42, "now"],
	[42, "last"],
	[1, null],
	[0.5, null],
	[10, null],
	[0.8 / 42, "now"],
	[1.3 / 42, null],
] as const)("a ratio of %d with 42 pounds to the bushel", (ratio, verdict) => {
	expect(unitSlip(ratio, 42)).toBe(verdict);
});

test("what is no ratio or no larger unit is refused", () => {
	expect(() => unitSlip(0, 42)).toThrow(RangeError);
	expect(() => unitSlip(1, 1)).toThrow(RangeError);
});
