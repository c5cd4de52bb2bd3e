import { describe, expect, test } from "vitest";
import { quantileEstimate } from "#app/estimate/quantile.ts";

/** A stratum of four times as many operations as answered, one answer for each day given. */
function stratum(days: number[], respondents = days.length) {
	const counts = days.map((value) => ({ value, n: 1 }));
	return { weight: 4, samplingFraction: 0.25, respondents, counts };
}

describe("a weighted quantile", () => {
	test("a median that ends between two days is the day before, or their midpoint by the other rule", () => {
		const days = [stratum([118, 110, 112, 121])];
		expect(quantileEstimate(days, 0.5)?.value).toBe(112);
		expect(quantileEstimate(days, 0.5, { rule: "midpoint" })?.value).toBe(115);
	});

	test("weights move it", () => {
		const early = { ...stratum([100, 101]), weight: 10 };
		const late = { ...stratum([120, 121, 122]), weight: 1 };
		expect(quantileEstimate([early, late], 0.5)?.value).toBe(101);
	});

	test("all on one day: no doubt is left but for the days nobody gave", () => {
		expect(quantileEstimate([stratum([115, 115, 115])], 0.5)).toMatchObject({ value: 115, lower: 115, upper: 115 });
	});

	test("an interval that runs off the answers is missing, not invented", () => {
		const figure = quantileEstimate([stratum([110, 120])], 0.5);
		expect(figure).toMatchObject({ value: 110, lower: null, upper: null, standardError: null, respondents: 2 });
	});

	test("one answer has a value and no interval; none has neither", () => {
		const one = quantileEstimate([stratum([110], 5)], 0.5);
		expect(one).toMatchObject({ value: 110, lower: null, upper: null, standardError: null, respondents: 1 });
		expect(quantileEstimate([stratum([], 5)], 0.5)).toBeNull();
		expect(() => quantileEstimate([stratum([110, 111])], 1)).toThrow(RangeError);
	});
});
