import { expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { designEffect } from "#app/estimate/design-effect.ts";
import { meanEstimate } from "#app/estimate/estimators.ts";

function stratum(frameSize: number, ys: number[]) {
	const respondents = ys.length;
	const domain = momentsOf(ys.map((y) => ({ y, x: 1 })));
	return { weight: frameSize / respondents, samplingFraction: respondents / frameSize, respondents, domain };
}

test("a simple random sample has a design effect of 1", () => {
	const strata = [stratum(40, [1, 5, 2, 9])];
	const variance = meanEstimate(strata)!.standardError ** 2;
	expect(designEffect(variance, strata)).toBeCloseTo(1, 12);
	expect(designEffect(variance, strata, "again")).toBeCloseTo(0.9, 12);
});

test("strata that hold like operations help", () => {
	const strata = [stratum(40, [1, 2, 1, 2]), stratum(40, [90, 91, 90, 91])];
	expect(designEffect(meanEstimate(strata)!.standardError ** 2, strata)).toBeLessThan(0.01);
});

test("one respondent, answers all alike and a full count have none", () => {
	expect(designEffect(1, [stratum(40, [3])])).toBeNull();
	expect(designEffect(0, [stratum(40, [3, 3])])).toBeNull();
	expect(designEffect(0, [stratum(2, [3, 4])])).toBeNull();
});
