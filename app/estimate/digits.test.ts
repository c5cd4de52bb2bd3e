// Values of a billion that differ by one: what plain sums of squares get wrong from the first digit on.
import { describe, expect, test } from "vitest";
import { momentsOf, sumMoments } from "#app/lib/moments.ts";
import { changeEstimate, type TwoSeasonStratum } from "#app/estimate/change.ts";
import type { DomainStratum } from "#app/estimate/domain.ts";
import { meanEstimate, ratioEstimate, totalEstimate } from "#app/estimate/estimators.ts";
import { pairedMomentsOf } from "#app/lib/paired-moments.ts";

const billion = 1e9;
/** Two strata of answers in quarters, which have no rounding of their own; every third lies in the domain. */
const offsets = [
	Array.from({ length: 120 }, (_, i) => ((i * 37) % 5) / 4),
	Array.from({ length: 90 }, (_, i) => ((i * 53) % 7) / 4),
];
const frameSizes = [700, 1100];

/** The strata with answers moved up by `far`, each tally made of ten counties'. */
function strata(far: number, inside: (i: number) => boolean): DomainStratum[] {
	return offsets.map((own, h) => {
		const answers = own.map((offset, i) => ({ y: far + offset, x: far + ((i * 11) % 5) / 4, i }));
		const parts = Array.from({ length: 10 }, (_, part) =>
			momentsOf(answers.filter(({ i }) => inside(i) && i % 10 === part)),
		);
		const respondents = own.length;
		const weight = frameSizes[h]! / respondents;
		return { weight, samplingFraction: 1 / weight, respondents, domain: sumMoments(parts) };
	});
}

const everybody = () => true;
const third = (i: number) => i % 3 === 0;

/** Standard error of the mean by the definition, from the offsets alone: moving all answers leaves it as it is. */
function errorOfMean(inside: (i: number) => boolean): number {
	const weights = frameSizes.map((size, h) => size / offsets[h]!.length);
	const totals = offsets.map((own) => own.filter((_, i) => inside(i)));
	const count = totals.reduce((sum, own, h) => sum + weights[h]! * own.length, 0);
	const mean = totals.reduce((sum, own, h) => sum + weights[h]! * own.reduce((all, y) => all + y, 0), 0) / count;
	let variance = 0;
	for (const [h, own] of offsets.entries()) {
		const z = own.map((y, i) => (inside(i) ? (weights[h]! * (y - mean)) / count : 0));
		const middle = z.reduce((sum, each) => sum + each, 0) / z.length;
		const spread = z.reduce((sum, each) => sum + (each - middle) ** 2, 0);
		variance += (1 - 1 / weights[h]!) * (z.length / (z.length - 1)) * spread;
	}
	return Math.sqrt(variance);
}

/** The strata in two seasons, in which the same operations answered, moved up by `far`. */
function twoSeasons(far: number): TwoSeasonStratum[] {
	return offsets.map((own, h) => {
		const answers = own.map((offset, i) => ({ now: far + offset, before: far + ((i * 29) % 9) / 4 }));
		const respondents = own.length;
		const weight = frameSizes[h]! / respondents;
		const design = { weight, samplingFraction: 1 / weight, respondents };
		const domain = pairedMomentsOf(
			answers.map(({ before, now }) => ({ yBefore: before, xBefore: 1, yNow: now, xNow: 1 })),
		);
		return {
			before: { ...design, domain: momentsOf(answers.map(({ before }) => ({ y: before, x: 1 }))) },
			now: { ...design, domain: momentsOf(answers.map(({ now }) => ({ y: now, x: 1 }))) },
			both: { frameSize: frameSizes[h]!, respondents, domain },
		};
	});
}

const relativeError = (actual: number, expected: number) => Math.abs(actual / expected - 1);

describe("values of 1e9 with spread 1 have the right standard error to 1e-9", () => {
	test.each([
		["everybody", everybody],
		["a domain across strata", third],
	])("of the mean, for %s", (_, inside) => {
		const figure = meanEstimate(strata(billion, inside))!;
		expect(relativeError(figure.standardError, errorOfMean(inside))).toBeLessThan(1e-9);
		expect(figure.standardError).toBeGreaterThan(0.01);
	});

	test("of the total", () => {
		const [near, far] = [totalEstimate(strata(0, everybody)), totalEstimate(strata(billion, everybody))];
		expect(relativeError(far.standardError, near.standardError)).toBeLessThan(1e-9);
	});

	test.each([
		["everybody", everybody],
		["a domain across strata", third],
	])("of a ratio of two such quantities, for %s", (_, inside) => {
		// With R = 1 + d the residual is (y - x) - d x: from differences of the offsets, as x is half above a billion on
		// average and d of some 1e-10.
		const far = strata(billion, inside);
		const differences = offsets.map((own, h) => {
			const answers = own.map((offset, i) => ({ y: offset - ((i * 11) % 5) / 4, x: billion + 0.5, i }));
			return { ...far[h]!, domain: momentsOf(answers.filter(({ i }) => inside(i))) };
		});
		const [ours, expected] = [ratioEstimate(far)!, ratioEstimate(differences)!];
		expect(relativeError(ours.standardError, expected.standardError)).toBeLessThan(1e-9);
	});

	test("of a change between seasons", () => {
		const [near, far] = [changeEstimate("mean", twoSeasons(0)), changeEstimate("mean", twoSeasons(billion))];
		expect(relativeError(far.difference!.standardError!, near.difference!.standardError!)).toBeLessThan(1e-9);
	});
});
