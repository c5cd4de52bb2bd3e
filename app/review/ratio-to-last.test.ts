import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { findOddRatios, ratioBounds, ratioEffects, type SeasonPair } from "#app/review/ratio-to-last.ts";

const pairs = (nows: (number | null)[], last: number | null = 1000): SeasonPair[] =>
	nows.map((now, i) => ({ key: String(i), last, now }));

describe("ratios to last season", () => {
	test("half and double lie equally far from the centre", () => {
		const { effects } = ratioEffects(pairs([500, 1000, 2000]), { sizePower: 0 });
		expect(effects.map(({ distance }) => distance)).toEqual([-1, 0, 1]);
	});

	test("a zero or a missing quantity has no ratio and is named, not dropped", () => {
		const { effects, notTested } = ratioEffects([
			{ key: "none", last: null, now: 5 },
			{ key: "lost", last: 900, now: 0 },
			{ key: "fine", last: 900, now: 800 },
		]);
		expect(notTested).toEqual(["none", "lost"]);
		expect(effects.map(({ key }) => key)).toEqual(["fine"]);
		expect(ratioEffects(pairs([null])).centre).toBeNull();
	});

	test("a year in which everybody lost half flags the one who did not", () => {
		const half = pairs([480, 505, 510, 490, 520, 500, 495, 515, 1500]);
		expect(findOddRatios(half).flagged.map(({ key }) => key)).toEqual(["8"]);
	});

	test("the same change weighs more at a large operation", () => {
		const { effects } = ratioEffects(
			[
				{ key: "small", last: 100, now: 300 },
				{ key: "large", last: 10_000, now: 30_000 },
			],
			{ centre: 1 },
		);
		expect(effects[1]!.effect).toBeCloseTo(10 * effects[0]!.effect, 10);
	});

	test("few pairs are not tested, and many that changed alike flag nobody else", () => {
		expect(findOddRatios(pairs([500, 900, 5000]))).toMatchObject({ untested: "few_pairs", flagged: [] });
		const alike = pairs([800, 800, 800, 800, 800, 800, 810, 5000]);
		expect(findOddRatios(alike)).toMatchObject({ untested: "many_alike", flagged: [] });
	});

	test("a wider reach flags no more than a narrower one", () => {
		const amount = fc.integer({ min: 1, max: 100_000 });
		const pair = fc.record({ last: amount, now: amount });
		fc.assert(
			fc.property(fc.array(pair, { minLength: 1, maxLength: 30 }), (all) => {
				const { effects } = ratioEffects(all.map((each, i) => ({ ...each, key: String(i) })));
				const [narrow, wide] = [4, 10].map((reach) => ratioBounds(effects, { reach }).flagged);
				expect(narrow).toEqual(expect.arrayContaining(wide!));
			}),
		);
	});

	test("a centre that is no ratio is refused", () => {
		expect(() => ratioEffects(pairs([500]), { centre: 0 })).toThrow(RangeError);
		expect(() => ratioBounds([])).toThrow(RangeError);
	});
});
