import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { frameResponse, itemResponseRate, responseRates, type Outcomes } from "#app/estimate/response-rate.ts";

const outcomes = (counts: number[]): Outcomes => {
	const [complete, partial, refused, notContacted, otherwise, unknown, notEligible] = counts as [
		number,
		number,
		number,
		number,
		number,
		number,
		number,
	];
	return { complete, partial, refused, notContacted, otherwise, unknown, notEligible };
};

describe("AAPOR response rates", () => {
	// First: counts and eight digits printed in the documentation of R's outcomerate. Second: by hand, for a list of 6,200.
	test.each([
		[
			[760, 339, 59, 288, 1, 173, 71],
			[0.4691358024691358, 0.678395061728395, 0.47149080235745405, 0.6818005155142658, 0.525224602626123],
			[0.7595024187975121, 0.953227931488801],
		],
		[
			[2100, 150, 900, 1850, 100, 800, 300],
			[0.3559322033898305, 0.3813559322033898, 0.3586337760910816, 0.3842504743833017, 0.4117647058823529],
			[0.4411764705882353, 0.9444444444444444],
		],
	])("worked numbers of %j", (counts, first, last) => {
		const { rr1, rr2, rr3, rr4, rr5, rr6, eligibleShare } = responseRates(outcomes(counts));
		for (const [i, rate] of [rr1, rr2, rr3, rr4, rr5, rr6, eligibleShare].entries()) {
			expect(rate! / [...first, ...last][i]!).toBeCloseTo(1, 12);
		}
	});

	test("the cautious rate is never above the hopeful one, and a share of 1 or 0 makes the middle one of them", () => {
		const count = fc.nat(5000);
		const seven = fc.array(count, { minLength: 7, maxLength: 7 });
		fc.assert(
			fc.property(seven, (counts) => {
				const all = outcomes(counts);
				const { rr1, rr2, rr3, rr4, rr5, rr6 } = responseRates(all);
				for (const [low, middle, high] of [
					[rr1, rr3, rr5],
					[rr2, rr4, rr6],
				]) {
					if (low === null || middle === null || high === null) continue;
					expect(low).toBeLessThanOrEqual(middle! * (1 + 1e-12));
					expect(middle).toBeLessThanOrEqual(high! * (1 + 1e-12));
				}
				expect(responseRates(all, 1).rr3).toBe(rr1);
				expect(responseRates(all, 0).rr3).toBe(rr5);
			}),
		);
	});

	test("nobody asked has no rate, and nothing known leaves the middle rates open", () => {
		expect(Object.values(responseRates(outcomes([0, 0, 0, 0, 0, 0, 0])))).toEqual(Array(7).fill(null));
		expect(responseRates(outcomes([0, 0, 0, 0, 0, 9, 0]))).toMatchObject({ rr1: 0, rr3: null, rr5: null });
	});

	test("what cannot be counted is refused", () => {
		expect(() => responseRates(outcomes([-1, 0, 0, 0, 0, 0, 0]))).toThrow(RangeError);
		expect(() => responseRates(outcomes([1, 0, 0, 0, 0, 0, 0]), 1.2)).toThrow(RangeError);
	});
});

describe("response of a frame", () => {
	const counts = [
		{ disposition: "complete" as const, operations: 30, bearingTrees: 60_000 },
		{ disposition: "partial" as const, operations: 5, bearingTrees: 4000 },
		{ disposition: "refused" as const, operations: 5, bearingTrees: 6000 },
		{ disposition: "not_reached" as const, operations: 50, bearingTrees: 10_000 },
		{ disposition: "undeliverable" as const, operations: 10, bearingTrees: 20_000 },
		{ disposition: "not_eligible" as const, operations: 10, bearingTrees: 0 },
	];

	test("counted by operation and weighted by bearing trees", () => {
		const { counted, weighted, treesCovered } = frameResponse(counts);
		expect(counted).toMatchObject({ rr1: 0.3, rr5: 0.75, eligibleShare: 0.8 });
		expect(counted.rr3).toBeCloseTo(30 / (40 + 0.8 * 60), 12);
		expect(weighted).toMatchObject({ rr1: 0.6, rr5: 6 / 7, eligibleShare: 1 });
		expect(treesCovered).toBe(0.6);
	});

	test("answers begun and not sent in are no answer", () => {
		const { counted } = frameResponse(counts);
		expect(counted.rr2).toBe(counted.rr1);
	});

	test("who was spoken to is known to belong, so that the rates among those fall and the widest stays", () => {
		const moved = counts.map((count) => (count.disposition === "not_reached" ? { ...count, operations: 40 } : count));
		const reached = { disposition: "reached" as const, operations: 10, bearingTrees: 0 };
		const { counted } = frameResponse([...moved, reached]);
		expect(counted).toMatchObject({ rr1: 0.3, rr5: 0.6 });
		expect(counted.rr3).toBeCloseTo(30 / (50 + (50 / 60) * 50), 12);
	});

	test("parts of a frame add to the whole", () => {
		const halves = counts.flatMap((count) => [
			{ ...count, operations: count.operations - 2, bearingTrees: count.bearingTrees },
			{ ...count, operations: 2, bearingTrees: 0 },
		]);
		expect(frameResponse(halves)).toEqual(frameResponse(counts));
	});
});

describe("item response", () => {
	test("a question that was passed by was not asked; don't know is no value", () => {
		expect(itemResponseRate({ given: 6, dontKnow: 2, refused: 1, blank: 1, notAsked: 90 })).toBe(0.6);
		expect(itemResponseRate({ given: 0, dontKnow: 0, refused: 0, blank: 0, notAsked: 90 })).toBeNull();
		expect(() => itemResponseRate({ given: -1, dontKnow: 0, refused: 0, blank: 0, notAsked: 0 })).toThrow(RangeError);
	});
});
