import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { momentsOf } from "#app/lib/moments.ts";
import { type CallCell, spreadByStratum, worthOfCalls } from "./calls.ts";

const cell = (countyFips: string, more: Partial<CallCell> = {}): CallCell => ({
	countyFips,
	stratumKey: "IA-small",
	frameSize: 10,
	answered: 2,
	bearingTrees: 1000,
	...more,
});
const worths = (cells: CallCell[], spreads: Map<string, number> | null = new Map([["IA-small", 0.01]])) =>
	worthOfCalls(cells, spreads).map(({ worth }) => worth);

describe("the spread of a stratum", () => {
	test("by hand: 10 operations, answers 0 and 4, have s² = 8", () => {
		const domain = momentsOf([0, 4].map((y) => ({ y, x: 1 })));
		const stratum = { stratumKeys: ["a", "b"], weight: 5, samplingFraction: 0.2, respondents: 2, domain };
		const spreads = spreadByStratum("total", [stratum])!;
		expect([...spreads.keys()]).toEqual(["a", "b"]);
		expect(spreads.get("a")).toBeCloseTo(8, 10);
	});

	test("is not known from one answer", () => {
		const domain = momentsOf([{ y: 3, x: 1 }]);
		const stratum = { stratumKeys: ["a"], weight: 5, samplingFraction: 0.2, respondents: 1, domain };
		expect(spreadByStratum("total", [stratum])).toBeNull();
	});
});

describe("whose answer is worth most", () => {
	test("by hand: of one county with one cell, ten operations and two answers", () => {
		// The fall is U / (3 · 4), the variance U (1/3 - 1/11): U = (10 T / T)² 0.01 cancels.
		const [only] = worthOfCalls([cell("a")], new Map([["IA-small", 0.01]]));
		expect(only!.worth).toBe(1);
		expect(only!.share).toBeCloseTo(1 / 12 / (1 / 3 - 1 / 11), 12);
	});

	test("the county with fewer answers comes first, and one with none before all", () => {
		const [none, two, nine] = worths([cell("a", { answered: 0 }), cell("b"), cell("c", { answered: 9 })]);
		expect(none).toBe(1);
		// (n + 1)(n + 2): 2, 12 and 110.
		expect(two).toBeCloseTo(2 / 12, 12);
		expect(nine).toBeCloseTo(2 / 110, 12);
	});

	test("where answers differ more, one more is worth more", () => {
		const cells = [cell("a"), cell("b", { stratumKey: "IA-large" })];
		const [small, large] = worths(
			cells,
			new Map([
				["IA-small", 0.01],
				["IA-large", 0.04],
			]),
		);
		expect(large! / small!).toBeCloseTo(4, 12);
	});

	test("where everybody answered there is nothing to gain", () => {
		expect(worthOfCalls([cell("a", { answered: 10 })], new Map([["IA-small", 1]]))).toEqual([
			{ countyFips: "a", stratumKey: "IA-small", worth: 0, share: 0 },
		]);
	});

	test("before anybody answered, operations are supposed to vary as their trees do", () => {
		const [small, large] = worths(
			[
				cell("a", { answered: 0, bearingTrees: 100 }),
				cell("a", { stratumKey: "IA-large", answered: 0, bearingTrees: 1000 }),
			],
			null,
		);
		expect(large! / small!).toBeCloseTo(100, 9);
	});

	test("a cell cannot have more answers than operations", () => {
		expect(() => worths([cell("a", { answered: 11 })])).toThrow(RangeError);
	});

	test("shares lie between 0 and 1, and the unit of the figure does not change the order", () => {
		const anyCell = fc
			.record({ county: fc.integer({ min: 0, max: 4 }), frameSize: fc.integer({ min: 1, max: 60 }) })
			.chain(({ county, frameSize }) =>
				fc.record({
					countyFips: fc.constant(String(county)),
					stratumKey: fc.constantFrom("s", "l"),
					frameSize: fc.constant(frameSize),
					answered: fc.integer({ min: 0, max: frameSize }),
					bearingTrees: fc.integer({ min: 0, max: 5000 }),
				}),
			);
		fc.assert(
			fc.property(fc.array(anyCell, { minLength: 1, maxLength: 12 }), (cells) => {
				const told = worthOfCalls(
					cells,
					new Map([
						["s", 0.5],
						["l", 2],
					]),
				);
				const scaled = worthOfCalls(
					cells,
					new Map([
						["s", 50],
						["l", 200],
					]),
				);
				for (const [i, { worth, share }] of told.entries()) {
					expect(worth).toBeGreaterThanOrEqual(0);
					expect(worth).toBeLessThanOrEqual(1);
					expect(share).toBeGreaterThanOrEqual(0);
					expect(share).toBeLessThanOrEqual(1 + 1e-12);
					expect(scaled[i]!.worth).toBeCloseTo(worth, 9);
				}
			}),
		);
	});
});
