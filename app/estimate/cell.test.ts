import { describe, expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { estimateCell, type EstimateKind } from "#app/estimate/cell.ts";
import { defaultCutOffs } from "#app/estimate/steadiness.ts";
import { joinStrata } from "#app/estimate/strata.ts";

const frame = [
	{ stratumKey: "55.small", stateFips: "55", sizeClass: 1, frameSize: 60 },
	{ stratumKey: "55.large", stateFips: "55", sizeClass: 3, frameSize: 6 },
];
const strata = joinStrata(frame, new Map([["55.small", 20], ["55.large", 6]])); // prettier-ignore

function tally(stratumKey: string, operations: [number, number][]) {
	return { stratumKey, ...momentsOf(operations.map(([y, x]) => ({ y, x }))) };
}

const some = [tally("55.small", [[10, 100], [50, 100], [20, 200]]), tally("55.large", [[900, 3000], [100, 1000]])]; // prettier-ignore

function totalOf(tallies: typeof some): number {
	return estimateCell({ kind: "total" }, strata, tallies).value!;
}

describe("a cell's estimate", () => {
	test("a loss share comes with standard error, CV, interval and a word", () => {
		const cell = estimateCell({ kind: "ratio" }, strata, some);
		// Weights 3 and 1: (3 * 80 + 1000) / (3 * 400 + 4000).
		expect(cell.value).toBeCloseTo(1240 / 5200, 14);
		expect(cell.cv).toBeCloseTo(cell.standardError! / cell.value!, 14);
		expect(cell.lower).toBeLessThan(cell.value!);
		expect(cell.upper).toBeGreaterThan(cell.value!);
		expect(cell).toMatchObject({ respondents: 5, steadiness: "steady", joins: [], missing: null });
	});

	test("counties add to their state in total, as all use the same strata", () => {
		const north = [tally("55.small", [[10, 100], [50, 100]])]; // prettier-ignore
		const south = [tally("55.small", [[20, 200], [5, 50]]), tally("55.large", [[900, 3000]])]; // prettier-ignore
		expect(totalOf(north) + totalOf(south)).toBeCloseTo(totalOf([...north, ...south]), 9);
	});

	test.each<EstimateKind>(["total", "mean", "ratio", "proportion"])("nobody's %s has no value", (kind) => {
		const cell = estimateCell({ kind }, strata, []);
		expect(cell).toMatchObject({ value: null, standardError: null, cv: null, lower: null, upper: null });
		expect(cell).toMatchObject({ respondents: 0, missing: "no_respondents", steadiness: "rough" });
	});

	test.each<EstimateKind>(["total", "mean", "ratio", "proportion"])("one operation's %s is never precise", (kind) => {
		const cell = estimateCell({ kind }, strata, [tally("55.small", [[1, 1]])]);
		expect(cell.value).not.toBeNull();
		expect(cell).toMatchObject({ standardError: null, cv: null, lower: null, upper: null });
		expect(cell).toMatchObject({ missing: "one_respondent", steadiness: "rough" });
	});

	test("one respondent of a whole network needs no variance to be shown to the desk", () => {
		const alone = joinStrata(frame, new Map([["55.small", 1]]));
		const cell = estimateCell({ kind: "ratio" }, alone, [tally("55.small", [[1, 4]])]);
		expect(cell).toMatchObject({ value: 0.25, standardError: null, missing: "one_respondent" });
	});

	test("a normal crop of nothing leaves no loss share", () => {
		const cell = estimateCell({ kind: "ratio" }, strata, [tally("55.small", [[0, 0], [0, 0]])]); // prettier-ignore
		expect(cell).toMatchObject({ value: null, respondents: 2, missing: "no_base", steadiness: "rough" });
	});

	test("a share of nobody keeps an interval above 0 and is not called steady", () => {
		const none = [
			tally(
				"55.small",
				Array.from({ length: 10 }, () => [0, 1] as [number, number]),
			),
		];
		const cell = estimateCell({ kind: "proportion" }, strata, none);
		expect(cell).toMatchObject({ value: 0, standardError: 0, cv: null, lower: 0, steadiness: "care" });
		// The exact upper end with n of 10 is 1 - 0.025^(1/10) = 0.308 (Clopper and Pearson), here with one stratum.
		expect(cell.upper).toBeCloseTo(1 - 0.025 ** 0.1, 12);
	});

	test("answers that all agree have no interval, unless everybody gave one", () => {
		const answers: [number, number][] = [[0, 100], [0, 300], [0, 50]]; // prettier-ignore
		const cell = estimateCell({ kind: "ratio" }, strata, [tally("55.small", answers)]);
		expect(cell).toMatchObject({ value: 0, standardError: 0, lower: null, upper: null, steadiness: "care" });
		const alike: [number, number][] = [[25, 100], [75, 300], [12.5, 50]]; // prettier-ignore
		const share = estimateCell({ kind: "proportion" }, strata, [tally("55.small", alike)]);
		expect(share).toMatchObject({ value: 0.25, standardError: 0, lower: null, upper: null, steadiness: "care" });
		const whole = estimateCell({ kind: "ratio" }, strata, [tally("55.large", answers)]);
		expect(whole).toMatchObject({ lower: 0, upper: 0 });
	});

	test("a share of all is exactly 1, also after weighting", () => {
		const all = [tally("55.small", [[1, 1], [1, 1], [1, 1]]), tally("55.large", [[1, 1]])]; // prettier-ignore
		const cell = estimateCell({ kind: "proportion" }, strata, all);
		expect(cell).toMatchObject({ value: 1, upper: 1, steadiness: "care" });
		expect(cell.lower).toBeLessThan(1);
	});

	test("where everybody was asked and answered there is no doubt left", () => {
		const cell = estimateCell({ kind: "proportion" }, strata, [tally("55.large", [[0, 1], [0, 1]])]); // prettier-ignore
		expect(cell).toMatchObject({ value: 0, standardError: 0, lower: 0, upper: 0, steadiness: "steady" });
	});

	test("an interval stops at what is possible", () => {
		const wild = [tally("55.small", [[0, 100], [95, 100], [1, 100]])]; // prettier-ignore
		expect(estimateCell({ kind: "ratio" }, strata, wild).lower).toBeLessThan(0);
		const measure = { kind: "ratio", range: { lowest: 0, highest: 1 } } as const;
		expect(estimateCell(measure, strata, wild)).toMatchObject({ lower: 0, steadiness: "rough" });
	});

	test("the network's own cut-offs decide the word", () => {
		const { cv } = estimateCell({ kind: "ratio" }, strata, some);
		const word = (steady: number, care: number) =>
			estimateCell({ kind: "ratio" }, strata, some, { ...defaultCutOffs, steady, care }).steadiness;
		expect(word(cv!, 1)).toBe("steady");
		expect(word(cv! / 2, cv!)).toBe("care");
		expect(word(cv! / 3, cv! / 2)).toBe("rough");
	});

	test("joins are told where they touch the area", () => {
		const joined = joinStrata(frame, new Map([["55.small", 20], ["55.large", 1]])); // prettier-ignore
		const cell = estimateCell({ kind: "ratio" }, joined, [tally("55.small", [[1, 4], [2, 3]])]); // prettier-ignore
		expect(cell.joins).toEqual([{ stratumKeys: ["55.small", "55.large"], step: "next_size" }]);
	});

	test("tallies that do not fit the frame are refused", () => {
		expect(() => estimateCell({ kind: "ratio" }, strata, [tally("27.small", [[1, 1]])])).toThrow("not in the frame");
		const many = [
			tally(
				"55.large",
				Array.from({ length: 7 }, () => [1, 1] as [number, number]),
			),
		];
		expect(() => estimateCell({ kind: "ratio" }, strata, many)).toThrow("6 respondents, its area 7");
		expect(() => estimateCell({ kind: "proportion" }, strata, [tally("55.small", [[9, 1], [8, 1]])])).toThrow(RangeError); // prettier-ignore
	});
});
