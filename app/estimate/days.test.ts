import { join } from "node:path";
import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { estimateDays } from "#app/estimate/days.ts";
import { joinStrata } from "#app/estimate/strata.ts";
import { estimateSurvey, type SurveyTally } from "#app/estimate/survey.ts";
import { groupBy } from "#app/lib/group-by.ts";
import { tallyOf } from "#app/tally/tally.ts";
import { readCsv, requiredNumber } from "#tests/reference/checking.ts";

const frame = { strata: [{ stratumKeys: ["s"], frameSize: 20, respondents: 8 }], joins: [] };
const told = (...days: number[]) => [{ stratumKey: "s", days: days.map((value) => ({ value, n: 1 })) }];

describe("a day of the year", () => {
	test("has its median, quartiles and interval among the days that were told", () => {
		const figure = estimateDays(frame, told(110, 112, 113, 115, 116, 118, 120, 125));
		expect(figure).toMatchObject({ value: 115, quartiles: { first: 112, third: 118 }, respondents: 8, missing: null });
		expect(figure).toMatchObject({ lower: 112, upper: 120, cv: null, steadiness: "care" });
		expect(figure.standardError).toBeCloseTo(4 / 2.364624, 5);
	});

	test("is rough with four answers or fewer, and has no interval with one", () => {
		expect(estimateDays(frame, told(110, 110, 111, 111))).toMatchObject({ value: 110, steadiness: "rough" });
		expect(estimateDays(frame, told(110))).toMatchObject({ value: 110, lower: null, missing: "one_respondent" });
		expect(estimateDays(frame, told(110)).quartiles).toBeUndefined();
		expect(estimateDays(frame, told())).toMatchObject({ value: null, respondents: 0, missing: "no_respondents" });
	});

	test("has a value where the only answer of the whole network is the area's", () => {
		const lone = { strata: [{ stratumKeys: ["s"], frameSize: 20, respondents: 1 }], joins: [] };
		expect(estimateDays(lone, told(110))).toMatchObject({ value: 110, standardError: null, steadiness: "rough" });
	});

	test("on which all agree is to be used with care, unless everybody was asked", () => {
		const days = told(...Array<number>(8).fill(114));
		expect(estimateDays(frame, days)).toMatchObject({ value: 114, lower: 114, upper: 114, steadiness: "care" });
		const all = { strata: [{ stratumKeys: ["s"], frameSize: 8, respondents: 8 }], joins: [] };
		expect(estimateDays(all, days)).toMatchObject({ value: 114, standardError: 0, steadiness: "steady" });
		expect(estimateDays(all, told(100, 101, 102, 103, 130, 131, 132, 133))).toMatchObject({ lower: 103, upper: 103 });
	});

	test("in a stratum outside the frame is refused", () => {
		expect(() => estimateDays(frame, [{ stratumKey: "x", days: [{ value: 110, n: 1 }] }])).toThrow(RangeError);
	});
});

// Source: R survey 4.1-1 `svyquantile` with `qrule = "math"`; see SOURCES.md beside the files.
describe("the reference set's quartiles", async () => {
	const folder = join(import.meta.dirname, "../../tests/reference/data/estimation");
	const strata = await readCsv(folder, "days_strata.csv");
	const histograms = groupBy(await readCsv(folder, "days_histograms.csv"), (row) => `${row.domain_type} ${row.domain}`);
	const expected = (await readCsv(folder, "days_expected.csv")).filter(({ qrule }) => qrule === "math");
	const states = [...histograms].filter(([domain]) => /^(all|state) /.test(domain));

	test.each(states)("of %s are those of a survey's estimate", (domain, counts) => {
		const at = (p: string) => expected.find((row) => `${row.domain_type} ${row.domain}` === domain && row.p === p)!;
		const design = {
			strata: strata.map((row) => ({
				stratumKeys: [row.stratum!],
				frameSize: requiredNumber(row, "N"),
				respondents: requiredNumber(row, "n"),
			})),
			joins: [],
		};
		const rows = counts.map((row) => ({
			stratumKey: row.stratum!,
			days: [{ value: requiredNumber(row, "day"), n: requiredNumber(row, "n") }],
		}));
		const figure = estimateDays(design, rows);
		expect(figure.respondents).toBe(requiredNumber(at("0.5"), "n"));
		expect(figure.value).toBe(requiredNumber(at("0.5"), "quantile"));
		expect(figure.quartiles).toEqual({
			first: requiredNumber(at("0.25"), "quantile"),
			third: requiredNumber(at("0.75"), "quantile"),
		});
		// There by t and here on the logit scale: for so many answers the same days.
		expect(figure.lower).toBe(requiredNumber(at("0.5"), "lower"));
		expect(figure.upper).toBe(requiredNumber(at("0.5"), "upper"));
		expect(figure.standardError).toBeCloseTo(requiredNumber(at("0.5"), "se"), 9);
	});
});

type Operation = { county: string; size: number; day: number };
const operation: fc.Arbitrary<Operation> = fc.record({
	county: fc.constantFrom("19153", "19169"),
	size: fc.nat(2),
	day: fc.integer({ min: 90, max: 150 }),
});
const survey = fc.array(operation, { minLength: 1, maxLength: 40 });
const measure = { key: "first_bloom", kind: "day", scale: 1, unit: "day" } as const;
const areasOfCounty = new Map(["19153", "19169"].map((county) => [county, [county, "19"]]));

function tally(countyFips: string, size: number, days: number[]): SurveyTally {
	return {
		measureKey: "first_bloom",
		cropKey: "apple",
		countyFips,
		stateFips: "19",
		stratumKey: `IA-${size}`,
		setAside: 0,
		...tallyOf(days.map((y) => ({ y, x: 1 }))),
		days: [...groupBy(days, (day) => day)].map(([value, same]) => ({ value, n: same.length })),
	};
}

function estimatesOf(tallies: SurveyTally[], operations: Operation[]) {
	const sizes = [0, 1, 2].map((size) => ({
		cropKey: "apple",
		stratumKey: `IA-${size}`,
		stateFips: "19",
		sizeClass: size,
		frameSize: 3 * operations.filter((each) => each.size === size).length,
	}));
	const { estimates } = estimateSurvey({ measures: [measure], frame: sizes, tallies, areasOfCounty });
	return new Map(estimates.map((estimate) => [estimate.areaKey, estimate]));
}

const byCell = (operations: Operation[]) =>
	[...groupBy(operations, ({ county, size }) => `${county} ${size}`)].map(([key, own]) => {
		const [county, size] = key.split(" ");
		return tally(
			county!,
			Number(size),
			own.map(({ day }) => day),
		);
	});

describe("for any survey", () => {
	test("a state's days are those of its counties' tallies, however they were split", () => {
		fc.assert(
			fc.property(survey, (operations) => {
				const apart = operations.map(({ county, size, day }) => tally(county, size, [day]));
				const state = estimatesOf(byCell(operations), operations).get("19");
				expect(estimatesOf(apart, operations).get("19")).toEqual(state);
				const one = operations.map((each) => ({ ...each, county: "19153" }));
				expect(estimatesOf(byCell(one), one).get("19153")).toEqual({ ...state, areaKey: "19153" });
			}),
		);
	});

	test("the order of answers and tallies does not matter", () => {
		fc.assert(
			fc.property(survey, (operations) => {
				const [there, back] = [byCell(operations), byCell(operations.toReversed()).toReversed()];
				const [before, after] = [estimatesOf(there, operations), estimatesOf(back, operations)];
				for (const [area, { joins: _joins, ...figure }] of before) expect(after.get(area)).toMatchObject(figure);
			}),
		);
	});

	test("quartiles, median and interval lie in order within the days that were told", () => {
		fc.assert(
			fc.property(survey, (operations) => {
				for (const [area, figure] of estimatesOf(byCell(operations), operations)) {
					const days = operations.filter(({ county }) => area === "19" || county === area).map(({ day }) => day);
					expect(days).toContain(figure.value);
					const { value, quartiles, lower, upper } = figure;
					const line = [Math.min(...days), quartiles?.first, value, quartiles?.third, Math.max(...days)];
					const known = line.flatMap((day) => day ?? []);
					expect(known).toEqual(known.toSorted((a, b) => a - b));
					if (lower !== null && upper !== null) {
						expect([lower, upper].every((end) => days.includes(end))).toBe(true);
						expect(lower <= value! && value! <= upper).toBe(true);
					}
				}
			}),
		);
	});

	test("weights are those of the joined strata", () => {
		const strata = [1, 2].map((size) => ({ stratumKey: `${size}`, stateFips: "19", sizeClass: size, frameSize: 10 }));
		const joined = joinStrata(
			strata,
			new Map([
				["1", 5],
				["2", 1],
			]),
		);
		const rows = [
			{ stratumKey: "1", days: [{ value: 100, n: 5 }] },
			{ stratumKey: "2", days: [{ value: 130, n: 1 }] },
		];
		expect(estimateDays(joined, rows)).toMatchObject({ value: 100, respondents: 6, joins: [{ step: "next_size" }] });
	});
});
