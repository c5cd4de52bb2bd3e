import { describe, expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { pairedMomentsOf } from "#app/lib/paired-moments.ts";
import { changeEstimate } from "#app/estimate/change.ts";
import { joinSeasons, twoSeasonStrata } from "#app/estimate/two-seasons.ts";

const frame = (sizes: number[]) =>
	sizes.map((frameSize, i) => ({ stratumKey: `s${i}`, stateFips: "55", sizeClass: i, frameSize }));
const counts = (each: number[]) => new Map(each.map((n, i) => [`s${i}`, n]));

const answers = (ys: number[]) => momentsOf(ys.map((y) => ({ y, x: 10 })));
const pairs = (ys: [number, number][]) =>
	pairedMomentsOf(ys.map(([yBefore, yNow]) => ({ yBefore, xBefore: 10, yNow, xNow: 10 })));

describe("strata of two seasons", () => {
	const joined = joinSeasons(
		{ frame: frame([40, 12, 5]), respondents: counts([10, 4, 3]) },
		{ frame: frame([41, 11, 5]), respondents: counts([12, 3, 1]) },
		{ frame: counts([39, 11, 5]), respondents: counts([8, 2, 1]) },
	);

	test("one that is too small in either season is joined in both", () => {
		expect(joined.strata).toEqual([
			{
				stratumKeys: ["s0"],
				before: { frameSize: 40, respondents: 10 },
				now: { frameSize: 41, respondents: 12 },
				both: { frameSize: 39, respondents: 8 },
			},
			{
				stratumKeys: ["s1", "s2"],
				before: { frameSize: 17, respondents: 7 },
				now: { frameSize: 16, respondents: 4 },
				both: { frameSize: 16, respondents: 3 },
			},
		]);
		expect(joined.joins).toEqual([{ stratumKeys: ["s1", "s2"], step: "next_size" }]);
	});

	test("a county's tallies become its part of each stratum, and its change adds to the state's", () => {
		const north = {
			before: [{ stratumKey: "s0", ...answers([1, 4]) }],
			now: [{ stratumKey: "s0", ...answers([3, 5, 2]) }],
			both: [{ stratumKey: "s0", ...pairs([[1, 3], [4, 5]]) }], // prettier-ignore
		};
		const south = {
			before: [{ stratumKey: "s1", ...answers([2]) }, { stratumKey: "s2", ...answers([9, 8]) }], // prettier-ignore
			now: [{ stratumKey: "s2", ...answers([7]) }],
			both: [{ stratumKey: "s2", ...pairs([[9, 7]]) }], // prettier-ignore
		};
		const state = {
			before: [...north.before, ...south.before],
			now: [...north.now, ...south.now],
			both: [...north.both, ...south.both],
		};
		const [n, s, all] = [north, south, state].map(
			(area) => changeEstimate("total", twoSeasonStrata(joined, area)).difference!.value,
		);
		expect(n! + s!).toBeCloseTo(all!, 10);
		expect(twoSeasonStrata(joined, south)[1]).toMatchObject({
			before: { respondents: 7, domain: { n: 3, sumY: 19 } },
			now: { respondents: 4, domain: { n: 1, sumY: 7 } },
			both: { frameSize: 16, respondents: 3, domain: { n: 1, sumYBefore: 9, sumYNow: 7 } },
		});
	});

	test("a season in which nobody answered has no strata to estimate from", () => {
		const none = joinSeasons(
			{ frame: frame([4]), respondents: counts([3]) },
			{ frame: frame([4]), respondents: counts([0]) },
			{ frame: counts([4]), respondents: counts([0]) },
		);
		const before = [{ stratumKey: "s0", ...momentsOf([{ y: 1, x: 1 }]) }];
		const strata = twoSeasonStrata(none, { before, now: [], both: [] });
		expect(strata[0]!.now).toBeNull();
		expect(changeEstimate("total", strata)).toMatchObject({ before: { value: 4 / 3 }, now: null, difference: null });
	});
});
