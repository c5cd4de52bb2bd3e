import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { gainsOfOneMore } from "#app/estimate/allocation.ts";

function stratum(frameSize: number, ys: number[]) {
	const respondents = ys.length;
	const domain = momentsOf(ys.map((y) => ({ y, x: 1 })));
	return { weight: frameSize / respondents, samplingFraction: respondents / frameSize, respondents, domain };
}

describe("what one more answer is worth", () => {
	test("by hand: 10 operations, answers 0 and 4", () => {
		const { gains } = gainsOfOneMore("total", [stratum(10, [0, 4])])!;
		// s² = 8: 100 * 8 * (1/2 - 1/3).
		expect(gains[0]!.reduction).toBeCloseTo(800 / 6, 10);
		expect(gains[0]!.standardErrorAfter).toBeCloseTo(Math.sqrt(100 * 8 * (1 / 3 - 1 / 10)), 10);
	});

	test("where everybody answered there is nothing to gain", () => {
		const { gains } = gainsOfOneMore("mean", [stratum(3, [1, 5, 9]), stratum(10, [1, 5])])!;
		expect(gains[0]).toMatchObject({ reduction: 0, perAttempt: 0, borrowed: false });
		expect(gains[1]!.reduction).toBeGreaterThan(0);
	});

	test("one respondent borrows the spread of the others and is worth most at once", () => {
		const { gains } = gainsOfOneMore("total", [stratum(10, [3]), stratum(10, [0, 4])])!;
		expect(gains[0]).toMatchObject({ borrowed: true });
		expect(gains[0]!.reduction).toBeGreaterThan(gains[1]!.reduction);
		expect(gainsOfOneMore("total", [stratum(10, [3])])).toBeNull();
	});

	test("a stratum that seldom answers is worth less an attempt", () => {
		const [often, seldom] = [0.8, 0.2].map((responseRate) => ({ ...stratum(20, [1, 5, 9]), responseRate }));
		const { gains } = gainsOfOneMore("mean", [often!, seldom!])!;
		expect(gains[0]!.perAttempt).toBeCloseTo(4 * gains[1]!.perAttempt, 12);
		expect(() => gainsOfOneMore("mean", [{ ...often!, responseRate: 1.1 }])).toThrow(RangeError);
	});

	test("no base, no gain", () => {
		const without = stratum(10, [1, 2]);
		expect(gainsOfOneMore("ratio", [{ ...without, domain: { ...without.domain, sumX: 0 } }])).toBeNull();
	});

	test("it never takes off more than there is", () => {
		const design = fc.array(
			fc.tuple(
				fc.array(fc.integer({ min: 0, max: 900 }), { minLength: 2, maxLength: 8 }),
				fc.integer({ min: 1, max: 30 }),
			),
			{ minLength: 1, maxLength: 4 },
		);
		fc.assert(
			fc.property(design, (all) => {
				const strata = all.map(([ys, others]) => stratum(ys.length + others, ys));
				const { figure, gains } = gainsOfOneMore("total", strata)!;
				for (const { reduction } of gains) {
					expect(reduction).toBeGreaterThanOrEqual(0);
					expect(reduction).toBeLessThanOrEqual(figure.standardError ** 2 * (1 + 1e-12));
				}
			}),
		);
	});
});
