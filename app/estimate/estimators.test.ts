import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import type { DomainStratum } from "#app/estimate/domain.ts";
import {
	meanEstimate,
	ratioEstimate,
	ratioTotalEstimate,
	separateRatioTotalEstimate,
	totalEstimate,
} from "#app/estimate/estimators.ts";

type Operation = { y: number; x: number; inside: boolean };
type Sample = { frameSize: number; operations: Operation[] };

function seen({ frameSize, operations }: Sample): DomainStratum {
	const respondents = operations.length;
	return {
		weight: frameSize / respondents,
		samplingFraction: respondents / frameSize,
		respondents,
		domain: momentsOf(operations.filter(({ inside }) => inside)),
	};
}

const operation = fc.record({
	y: fc.integer({ min: 0, max: 100_000 }),
	x: fc.integer({ min: 1, max: 100_000 }),
	inside: fc.boolean(),
});
const sample: fc.Arbitrary<Sample> = fc
	.tuple(fc.array(operation, { minLength: 2, maxLength: 12 }), fc.nat(50))
	.map(([operations, others]) => ({ operations, frameSize: operations.length + others }));
const samples = fc.array(sample, { minLength: 1, maxLength: 5 });

/** The same by the definition: every respondent's own linearized value, outsiders as zeros. */
function ratioByDefinition(all: Sample[]): { value: number; standardError: number } | null {
	const weighted = (pick: (operation: Operation) => number) =>
		all.reduce((sum, { frameSize, operations }) => {
			const inside = operations.filter((each) => each.inside);
			return sum + (frameSize / operations.length) * inside.reduce((part, each) => part + pick(each), 0);
		}, 0);
	const totalX = weighted(({ x }) => x);
	if (totalX === 0) return null;
	const ratio = weighted(({ y }) => y) / totalX;
	let variance = 0;
	for (const { frameSize, operations } of all) {
		const n = operations.length;
		const z = operations.map(({ y, x, inside }) => (inside ? ((frameSize / n) * (y - ratio * x)) / totalX : 0));
		const mean = z.reduce((sum, each) => sum + each, 0) / n;
		const spread = z.reduce((sum, each) => sum + (each - mean) ** 2, 0);
		variance += (1 - n / frameSize) * (n / (n - 1)) * spread;
	}
	return { value: ratio, standardError: Math.sqrt(variance) };
}

describe("a ratio of totals", () => {
	test("from sums alone it equals the ratio operation by operation", () => {
		fc.assert(
			fc.property(samples, (all) => {
				const [ours, defined] = [ratioEstimate(all.map(seen)), ratioByDefinition(all)];
				expect(ours === null).toBe(defined === null);
				if (!ours || !defined) return;
				expect(Math.abs(ours.value - defined.value)).toBeLessThanOrEqual(1e-12 * (1 + defined.value));
				expect(Math.abs(ours.standardError - defined.standardError)).toBeLessThanOrEqual(1e-6 * (1 + defined.value));
			}),
			{ numRuns: 300 },
		);
	});

	test("it lies within the range of its operations' own ratios", () => {
		fc.assert(
			fc.property(samples, (all) => {
				const ratio = ratioEstimate(all.map(seen));
				const own = all.flatMap(({ operations }) => operations.flatMap((o) => (o.inside ? [o.y / o.x] : [])));
				expect(ratio === null).toBe(own.length === 0);
				if (!ratio) return;
				expect(ratio.value).toBeGreaterThanOrEqual(Math.min(...own) * (1 - 1e-12));
				expect(ratio.value).toBeLessThanOrEqual(Math.max(...own) * (1 + 1e-12));
				expect(ratio.standardError).toBeGreaterThanOrEqual(0);
			}),
		);
	});

	test("changing the unit of y changes value and standard error alike", () => {
		fc.assert(
			fc.property(samples, fc.constantFrom(0.001, 42, 2000), (all, unit) => {
				const scaled = all.map(({ frameSize, operations }) => ({
					frameSize,
					operations: operations.map(({ y, x, inside }) => ({ y: y * unit, x, inside })),
				}));
				const [before, after] = [ratioEstimate(all.map(seen)), ratioEstimate(scaled.map(seen))];
				expect(after === null).toBe(before === null);
				if (!before || !after) return;
				expect(Math.abs(after.value - before.value * unit)).toBeLessThanOrEqual(1e-11 * after.value);
				const miss = Math.abs(after.standardError - before.standardError * unit);
				expect(miss).toBeLessThanOrEqual(1e-6 * unit * (1 + before.value));
			}),
		);
	});

	test("y in step with x has no spread, not a rounding of one", () => {
		const operations = [3, 7, 11, 13].map((x) => ({ y: 0.1 * x, x, inside: true }));
		expect(ratioEstimate([seen({ frameSize: 40, operations })])?.standardError).toBe(0);
	});

	test("without any x there is no ratio", () => {
		expect(ratioEstimate([seen({ frameSize: 4, operations: [outside, outside] })])).toBeNull();
		expect(meanEstimate([seen({ frameSize: 4, operations: [outside, outside] })])).toBeNull();
		expect(ratioTotalEstimate([seen({ frameSize: 4, operations: [outside, outside] })], 10)).toBeNull();
	});
});

const outside: Operation = { y: 5, x: 5, inside: false };
const inside: Operation = { y: 5, x: 10, inside: true };

describe("variance", () => {
	test("operations outside the domain count as zeros: a total of half the stratum is not certain", () => {
		const figure = totalEstimate([seen({ frameSize: 8, operations: [inside, inside, outside, outside] })]);
		// By hand: weight 2, values 10 10 0 0 about their mean 5: 100; times (1 - 4/8) 4/3.
		expect(figure).toEqual({ value: 20, standardError: Math.sqrt(100 * 0.5 * (4 / 3)) });
	});

	test("a stratum in which everybody answered adds nothing, also when it is one operation", () => {
		expect(totalEstimate([seen({ frameSize: 1, operations: [inside] })])).toEqual({ value: 5, standardError: 0 });
	});

	test("a domain with one respondent gets the formula's 0 for a ratio, not for a total", () => {
		const strata = [seen({ frameSize: 9, operations: [inside, outside, outside] })];
		expect(ratioEstimate(strata)).toEqual({ value: 0.5, standardError: 0 });
		expect(meanEstimate(strata)).toEqual({ value: 5, standardError: 0 });
		expect(totalEstimate(strata).standardError).toBeGreaterThan(0);
	});

	test("one respondent of several is refused", () => {
		expect(() => ratioEstimate([seen({ frameSize: 2, operations: [inside] })])).toThrow("join it before");
	});

	test("a design that cannot be is refused", () => {
		const good = seen({ frameSize: 8, operations: [inside, inside] });
		expect(() => totalEstimate([{ ...good, weight: 0 }])).toThrow(RangeError);
		expect(() => totalEstimate([{ ...good, samplingFraction: 1.2 }])).toThrow(RangeError);
		expect(() => totalEstimate([{ ...good, respondents: 1 }])).toThrow(RangeError);
		expect(() => totalEstimate([{ ...good, domain: { ...good.domain, sumY: 1e308 }, weight: 1e10 }])).toThrow(
			RangeError,
		);
	});
});

test("with one stratum the separate and the combined ratio total are the same", () => {
	const stratum = seen({ frameSize: 30, operations: [inside, { y: 1, x: 4, inside: true }, outside] });
	const combined = ratioTotalEstimate([stratum], 700);
	const separate = separateRatioTotalEstimate([{ ...stratum, frameTotalX: 700 }]);
	expect(separate?.value).toBe(combined?.value);
	expect(separate?.standardError).toBeCloseTo(combined!.standardError, 10);
	const empty = seen({ frameSize: 5, operations: [outside, outside] });
	expect(separateRatioTotalEstimate([{ ...empty, frameTotalX: 3 }])).toBeNull();
	expect(separateRatioTotalEstimate([{ ...empty, frameTotalX: 0 }])).toEqual({ value: 0, standardError: 0 });
});
