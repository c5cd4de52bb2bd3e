import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { logitInterval } from "#app/estimate/interval.ts";
import { histogramStrata, quantileEstimate } from "#app/estimate/quantile.ts";

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
		// Degrees of freedom from the whole design must not lend a lone answer a precision.
		expect(quantileEstimate([stratum([110], 5)], 0.5, { df: 4 })).toMatchObject({ lower: null, standardError: null });
		expect(quantileEstimate([stratum([], 5)], 0.5)).toBeNull();
		expect(() => quantileEstimate([stratum([110, 111])], 1)).toThrow(RangeError);
	});

	test("a full count has the quantile for certain", () => {
		const everybody = { ...stratum([110, 112, 118, 121]), weight: 1, samplingFraction: 1 };
		expect(quantileEstimate([everybody], 0.5)).toMatchObject({ value: 112, lower: 112, upper: 112, standardError: 0 });
	});

	test("an interval of the share on the logit scale keeps its ends where by t they are missing", () => {
		const few = [stratum([110, 112, 118, 121])];
		expect(quantileEstimate(few, 0.5)).toMatchObject({ lower: null, upper: null });
		expect(quantileEstimate(few, 0.5, { interval: logitInterval })).toMatchObject({ lower: 110, upper: 121 });
	});

	test("it lies within its answers, and counts in one histogram or in many give the same", () => {
		const day = fc.integer({ min: 60, max: 200 });
		fc.assert(
			fc.property(
				fc.array(day, { minLength: 2, maxLength: 30 }),
				fc.double({ min: 0.01, max: 0.99, noNaN: true }),
				(days, p) => {
					const one = stratum(days);
					const counts = [...new Set(days)].map((value) => ({
						value,
						n: days.filter((each) => each === value).length,
					}));
					const [ours, merged] = [quantileEstimate([one], p), quantileEstimate([{ ...one, counts }], p)];
					expect(merged).toEqual(ours);
					expect(days).toContain(ours!.value);
					const later = stratum(days.map((each) => each + 7));
					expect(quantileEstimate([later], p)?.value).toBe(ours!.value + 7);
				},
			),
		);
	});
});

test("an area's histograms are its part of each joined stratum", () => {
	const frame = {
		strata: [
			{ stratumKeys: ["small"], frameSize: 40, respondents: 10 },
			{ stratumKeys: ["middle", "large"], frameSize: 9, respondents: 3 },
			{ stratumKeys: ["empty"], frameSize: 0, respondents: 0 },
		],
		joins: [],
	};
	const [early, late] = [[{ value: 110, n: 2 }], [{ value: 120, n: 1 }]];
	const strata = histogramStrata(frame, [
		{ stratumKey: "middle", days: early },
		{ stratumKey: "large", days: late },
		{ stratumKey: "large", days: null },
	]);
	expect(strata).toEqual([
		{ weight: 4, samplingFraction: 0.25, respondents: 10, counts: [] },
		{ weight: 3, samplingFraction: 1 / 3, respondents: 3, counts: [...early, ...late] },
	]);
	expect(quantileEstimate(strata, 0.5)?.value).toBe(110);
	expect(() => histogramStrata(frame, [{ stratumKey: "elsewhere", days: early }])).toThrow(RangeError);
});
