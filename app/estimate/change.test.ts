import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { pairedMomentsOf } from "#app/lib/paired-moments.ts";
import { changeEstimate, changeOfCell, type TwoSeasonStratum } from "#app/estimate/change.ts";

type Answer = { y: number; x: number };
type Operation = { before: Answer | null; now: Answer | null; inside?: boolean };

/** A stratum whose frame is the same in both seasons. */
function stratum(frameSize: number, operations: Operation[]): TwoSeasonStratum {
	const season = (key: "before" | "now") => {
		const all = operations.filter((operation) => operation[key]);
		const inside = all.filter((operation) => operation.inside !== false);
		const respondents = all.length;
		if (respondents === 0) return null;
		const domain = momentsOf(inside.map((operation) => operation[key]!));
		return { weight: frameSize / respondents, samplingFraction: respondents / frameSize, respondents, domain };
	};
	const both = operations.filter(({ before, now }) => before && now);
	const pairs = both
		.filter(({ inside }) => inside !== false)
		.map(({ before, now }) => ({ yBefore: before!.y, xBefore: before!.x, yNow: now!.y, xNow: now!.x }));
	return {
		before: season("before"),
		now: season("now"),
		both: { frameSize, respondents: both.length, domain: pairedMomentsOf(pairs) },
	};
}

const loss = (y: number, x = 10): Answer => ({ y, x });
const answered: Operation[] = [
	{ before: loss(1), now: loss(4) },
	{ before: loss(3), now: loss(5) },
	{ before: loss(2), now: loss(6) },
	{ before: loss(5), now: null },
	{ before: null, now: loss(2) },
];

/** Of the total of four answers in ten, by hand. */
function varianceOfTotal(values: number[]): number {
	const mean = values.reduce((sum, each) => sum + each, 0) / 4;
	return 100 * 0.6 * (values.reduce((sum, each) => sum + (each - mean) ** 2, 0) / 3 / 4);
}

describe("change between two seasons", () => {
	test("a full count in both seasons knows the change for certain", () => {
		const all = stratum(3, answered.slice(0, 3));
		const change = changeEstimate("ratio", [all]);
		expect(change.covariance).toBe(0);
		expect(change.difference).toEqual({ value: 0.3, standardError: 0 });
	});

	test("by hand: weights 2.5, three of four answered both", () => {
		const { before, now, covariance, difference, relative } = changeEstimate("total", [stratum(10, answered)]);
		expect([before?.value, now?.value]).toEqual([27.5, 42.5]);
		// s12 of (1,4) (3,5) (2,6) is 0.5; the bracket is 2.5 * 2.5 * 3 - 10.
		expect(covariance).toBeCloseTo(8.75 * 0.5, 12);
		const [first, second] = [varianceOfTotal([1, 3, 2, 5]), varianceOfTotal([4, 5, 6, 2])];
		expect(difference?.standardError).toBeCloseTo(Math.sqrt(first + second - 2 * 4.375), 12);
		const quotient = 42.5 / 27.5;
		expect(relative?.value).toBeCloseTo(quotient - 1, 12);
		const expected = Math.sqrt(second + quotient ** 2 * first - 2 * quotient * 4.375) / 27.5;
		expect(relative?.standardError).toBeCloseTo(expected, 12);
	});

	test("fewer who answered both than chance would give make the covariance negative", () => {
		const apart: Operation[] = [
			...[1, 2, 3, 4].map((y) => ({ before: loss(y), now: null })),
			...[2, 3, 5, 8].map((y) => ({ before: null, now: loss(y) })),
			{ before: loss(1), now: loss(1) },
			{ before: loss(9), now: loss(9) },
		];
		expect(changeEstimate("total", [stratum(12, apart)]).covariance).toBeLessThan(0);
	});

	test("one respondent in either season never looks precise", () => {
		const lone = answered.map((operation, i) => ({ ...operation, inside: i === 0 || i === 3 }));
		const { change, interval, missing, respondents } = changeOfCell("ratio", [stratum(10, lone)]);
		expect(respondents).toEqual({ before: 2, now: 1, both: 1 });
		expect(missing).toBe("one_respondent");
		expect(interval).toBeNull();
		expect(change.difference?.value).toBeCloseTo(0.1, 12);
		expect([change.now, change.difference, change.relative].map((figure) => figure?.standardError)).toEqual([
			null,
			null,
			null,
		]);
	});

	test("a season without answers has no change, and the other season is still told", () => {
		const before = answered.map((operation) => ({ ...operation, now: null }));
		const { change, missing } = changeOfCell("total", [stratum(10, before)]);
		expect(missing).toBe("no_respondents");
		expect(change).toMatchObject({ before: { value: 27.5 }, now: null, difference: null, covariance: null });
	});

	test("nothing lost last year leaves no relative change; no base leaves no change", () => {
		const from0 = answered.map((operation) => ({ ...operation, before: operation.before && loss(0) }));
		expect(changeEstimate("ratio", [stratum(10, from0)])).toMatchObject({
			difference: { value: 0.425 },
			relative: null,
		});
		const without = answered.map((operation) => ({ ...operation, before: operation.before && loss(0, 0) }));
		expect(changeOfCell("ratio", [stratum(10, without)]).missing).toBe("no_base");
	});

	test("sums that do not fit each other are refused", () => {
		const sound = stratum(10, answered);
		const both = { ...sound.both, respondents: 6 };
		expect(() => changeEstimate("total", [{ ...sound, both }])).toThrow(RangeError);
	});
});

const answer = fc.option(fc.record({ y: fc.integer({ min: 0, max: 5000 }), x: fc.integer({ min: 1, max: 9000 }) }));
const operation = fc.record({ before: answer, now: answer, inside: fc.boolean() });
const design = fc.array(
	fc
		.tuple(fc.array(operation, { minLength: 1, maxLength: 9 }), fc.nat(20))
		.map(([own, others]) =>
			stratum(own.length + others + 4, [...own, ...[2, 7].map((y) => ({ before: loss(y), now: loss(y + 1) }))]),
		),
	{ minLength: 1, maxLength: 4 },
);

test("turning the seasons round turns the change round and leaves its error", () => {
	fc.assert(
		fc.property(design, fc.constantFrom("total", "mean", "ratio" as const), (strata, kind) => {
			const turned = strata.map(({ before, now, both }) => {
				const { n, sumYBefore, sumXBefore, sumYNow, sumXNow, mYY, mYX, mXY, mXX } = both.domain;
				const sums = { sumYBefore: sumYNow, sumXBefore: sumXNow, sumYNow: sumYBefore, sumXNow: sumXBefore };
				return { before: now, now: before, both: { ...both, domain: { n, ...sums, mYY, mYX: mXY, mXY: mYX, mXX } } };
			});
			const [forth, back] = [changeEstimate(kind, strata), changeEstimate(kind, turned)];
			expect(back.difference!.value).toBeCloseTo(-forth.difference!.value, 6);
			expect(back.difference!.standardError ?? -1).toBeCloseTo(forth.difference!.standardError ?? -1, 6);
		}),
	);
});
