import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { CalibrationError, type Calibration, type Sample } from "#app/estimate/calibration/calibration.ts";
import { calibratedEstimate } from "#app/estimate/calibration/estimate.ts";
import { calibrateLinear } from "#app/estimate/calibration/linear.ts";
import { postStratify, rake, type Margin } from "#app/estimate/calibration/raking.ts";

const margin = (name: string, groups: string[], totals: Record<string, number>): Margin => ({
	name,
	groups,
	totals: new Map(Object.entries(totals)),
});

/** A simple random sample of a tenth. */
const sampleOf = (operations: number, weight = 10): Sample => ({
	operations: Array.from({ length: operations }, () => ({ stratum: 0, weight })),
	samplingFractions: [1 / weight],
});

function problemOf(calibrate: () => Calibration): string {
	try {
		calibrate();
		return "none";
	} catch (error) {
		if (error instanceof CalibrationError) return error.problem;
		throw error;
	}
}

function sumIn(calibration: Calibration, groups: string[], group: string): number {
	return calibration.weights.reduce((sum, weight, i) => sum + (groups[i] === group ? weight : 0), 0);
}

const sizes = ["small", "small", "small", "large"];
const places = ["north", "south", "south", "south"];

/** A margin that the shares given meet. */
function marginOf<Key extends string>(key: Key, members: (Record<Key, string> & { share: number })[]): Margin {
	const totals = new Map<string, number>();
	for (const member of members) totals.set(member[key], (totals.get(member[key]) ?? 0) + member.share);
	return { name: key, groups: members.map((member) => member[key]), totals };
}

describe("post-stratification", () => {
	test("each group's weights add up to its count on the frame", () => {
		const calibration = postStratify(sampleOf(4), margin("size", sizes, { small: 24, large: 16 }));
		expect(calibration.weights).toEqual([8, 8, 8, 16]);
		expect(calibration.factors).toEqual([0.8, 0.8, 0.8, 1.6]);
	});

	test("a quantity that is the same throughout each group has no error left", () => {
		const calibration = postStratify(sampleOf(4), margin("size", sizes, { small: 24, large: 16 }));
		const answers = sizes.map((size) => ({ y: size === "small" ? 100 : 900, x: 1 }));
		const figure = calibratedEstimate("total", sampleOf(4), calibration, answers)!;
		expect(figure.value).toBe(24 * 100 + 16 * 900);
		expect(figure.standardError / figure.value).toBeLessThan(1e-12);
	});
});

describe("raking", () => {
	test("meets every margin", () => {
		const size = margin("size", sizes, { small: 30, large: 10 });
		const place = margin("place", places, { north: 7, south: 33 });
		const calibration = rake(sampleOf(4), [size, place]);
		expect(sumIn(calibration, sizes, "large")).toBeCloseTo(10, 9);
		expect(sumIn(calibration, places, "north")).toBeCloseTo(7, 9);
	});

	test("the order of the margins does not matter, nor where the sample's weights stood in common", () => {
		const size = margin("size", sizes, { small: 30, large: 10 });
		const place = margin("place", places, { north: 7, south: 33 });
		const [one, other] = [rake(sampleOf(4), [size, place]), rake(sampleOf(4, 25), [place, size])];
		for (const [i, weight] of one.weights.entries()) expect(other.weights[i]).toBeCloseTo(weight, 9);
	});

	test("margins that count different frames are refused in words", () => {
		const size = margin("size", sizes, { small: 30, large: 10 });
		const place = margin("place", places, { north: 7, south: 34 });
		expect(problemOf(() => rake(sampleOf(4), [size, place]))).toBe("totals_differ");
		expect(() => rake(sampleOf(4), [size, place])).toThrow("margin size counts 40 operations, margin place 41");
	});

	test("margins that no weights can meet together are refused, not given as they stand after the last sweep", () => {
		const groups = ["a", "b"];
		const first = margin("first", groups, { a: 10, b: 30 });
		const second = margin("second", groups, { a: 30, b: 10 });
		expect(problemOf(() => rake(sampleOf(2), [first, second]))).toBe("not_converged");
	});

	test("too few sweeps are told", () => {
		const size = margin("size", sizes, { small: 30, large: 10 });
		const place = margin("place", places, { north: 7, south: 33 });
		expect(problemOf(() => rake(sampleOf(4), [size, place], { mostSweeps: 1 }))).toBe("not_converged");
	});

	test("a group without respondents, or without a count, is named", () => {
		expect(problemOf(() => rake(sampleOf(4), [margin("size", sizes, { small: 30, large: 9, huge: 1 })]))).toBe(
			"group_without_respondents",
		);
		expect(problemOf(() => rake(sampleOf(4), [margin("size", sizes, { small: 40 })]))).toBe("group_without_total");
		expect(() => rake(sampleOf(4), [margin("size", sizes, { small: 40, large: 0 })])).toThrow("size large");
		expect(problemOf(() => rake(sampleOf(4), [margin("size", sizes, { small: 36, large: 4, none: 0 })]))).toBe("none");
	});

	test("any margins that some weights meet are met", () => {
		const group = fc.constantFrom("a", "b", "c");
		const member = fc.record({ first: group, second: group, share: fc.integer({ min: 1, max: 50 }) });
		fc.assert(
			fc.property(fc.array(member, { minLength: 1, maxLength: 25 }), (members) => {
				const margins = (["first", "second"] as const).map((key) => marginOf(key, members));
				const calibration = rake(sampleOf(members.length), margins, { tolerance: 1e-9, mostSweeps: 20_000 });
				for (const { groups, totals: counts } of margins) {
					for (const [name, count] of counts) {
						expect(Math.abs(sumIn(calibration, [...groups], name) - count)).toBeLessThan(1e-6 * count + 1e-6);
					}
				}
				expect(Math.min(...calibration.weights)).toBeGreaterThan(0);
			}),
		);
	});
});

describe("linear calibration", () => {
	const trees = [100, 400, 250, 1250];
	const count = { name: "count", values: [1, 1, 1, 1], total: 40 };

	test("meets its totals", () => {
		const { weights } = calibrateLinear(sampleOf(4), [count, { name: "trees", values: trees, total: 21_000 }]);
		expect(weights.reduce((sum, weight) => sum + weight, 0)).toBeCloseTo(40, 9);
		expect(weights.reduce((sum, weight, i) => sum + weight * trees[i]!, 0)).toBeCloseTo(21_000, 6);
	});

	test("a quantity in step with the auxiliary is known without error", () => {
		const calibration = calibrateLinear(sampleOf(4), [{ name: "trees", values: trees, total: 21_000 }]);
		const answers = trees.map((x) => ({ y: 3 * x, x: 1 }));
		const figure = calibratedEstimate("total", sampleOf(4), calibration, answers)!;
		expect(figure.value).toBeCloseTo(63_000, 6);
		expect(figure.standardError).toBeLessThan(1e-6);
	});

	test("an auxiliary that the others determine is left out if its total agrees and refused if not", () => {
		const double = { name: "twice the count", values: [2, 2, 2, 2] };
		const { factors } = calibrateLinear(sampleOf(4), [count, { ...double, total: 80 }]);
		for (const factor of factors) expect(factor).toBeCloseTo(1, 12);
		expect(problemOf(() => calibrateLinear(sampleOf(4), [count, { ...double, total: 81 }]))).toBe("totals_contradict");
	});

	test("a total of what no respondent has is refused", () => {
		const young = { name: "young trees", values: [0, 0, 0, 0], total: 7 };
		expect(problemOf(() => calibrateLinear(sampleOf(4), [count, young]))).toBe("group_without_respondents");
		expect(problemOf(() => calibrateLinear(sampleOf(4), [count, { ...young, total: 0 }]))).toBe("none");
	});

	test("with groups as auxiliaries it is post-stratification", () => {
		const grouped = ["small", "large"].map((group, i) => ({
			name: group,
			values: sizes.map((size) => (size === group ? 1 : 0)),
			total: [24, 16][i]!,
		}));
		const { weights } = calibrateLinear(sampleOf(4), grouped);
		for (const [i, weight] of [8, 8, 8, 16].entries()) expect(weights[i]).toBeCloseTo(weight, 12);
	});
});

describe("a calibrated estimate", () => {
	test("a fully enumerated stratum adds no variance", () => {
		const sample: Sample = {
			operations: [1, 1, 1].map((weight) => ({ stratum: 0, weight })),
			samplingFractions: [1],
		};
		const calibration = postStratify(sample, margin("all", ["a", "a", "a"], { a: 3 }));
		const answers = [4, 90, 7].map((y) => ({ y, x: 1 }));
		expect(calibratedEstimate("total", sample, calibration, answers)).toEqual({ value: 101, standardError: 0 });
	});

	test("nobody in the domain is nothing to divide by", () => {
		const calibration = postStratify(sampleOf(2), margin("all", ["a", "a"], { a: 20 }));
		expect(calibratedEstimate("mean", sampleOf(2), calibration, [null, null])).toBeNull();
		expect(() => calibratedEstimate("mean", sampleOf(2), calibration, [null])).toThrow(RangeError);
	});

	test("a sample that cannot be is refused", () => {
		const all = margin("all", ["a", "a"], { a: 20 });
		expect(() => postStratify({ ...sampleOf(2), samplingFractions: [] }, all)).toThrow(RangeError);
		expect(() => postStratify(sampleOf(2, 0), all)).toThrow(RangeError);
		expect(() => postStratify(sampleOf(3), all)).toThrow(RangeError);
		expect(() => calibrateLinear(sampleOf(2), [{ name: "x", values: [1, Number.NaN], total: 3 }])).toThrow(RangeError);
	});
});
