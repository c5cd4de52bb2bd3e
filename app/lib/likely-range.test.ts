import { expect, test } from "vitest";
import { isApart } from "./likely-range.ts";

test("figures differ for sure only where both have a likely range and the ranges have nothing in common", () => {
	const [low, high] = [
		{ lower: 10, upper: 20 },
		{ lower: 21, upper: 30 },
	];
	expect([isApart(low, high), isApart(high, low)]).toEqual([true, true]);
	expect(isApart(low, { lower: 20, upper: 30 })).toBe(false);
	const alone = { lower: null, upper: null };
	expect([isApart(low, alone), isApart(alone, high), isApart(alone, alone)]).toEqual([false, false, false]);
});
