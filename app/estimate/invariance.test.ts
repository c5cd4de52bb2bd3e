// What must hold for any survey: figures do not depend on how its tallies were split, ordered or measured.
import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { addMoments, emptyMoments, momentsOf, type Moments } from "#app/lib/moments.ts";
import { estimateCell, type EstimateKind } from "#app/estimate/cell.ts";
import { joinStrata, type StrataFrame } from "#app/estimate/strata.ts";

type Operation = { county: string; size: number; y: number; x: number };
type Survey = { operations: Operation[]; others: number[] };
type Row = Moments & { county: string; stratumKey: string };

const counties = ["001", "003", "005", "007"];
const operation: fc.Arbitrary<Operation> = fc.record({
	county: fc.constantFrom(...counties),
	size: fc.nat(2),
	y: fc.integer({ min: 0, max: 40_000 }),
	x: fc.integer({ min: 40_000, max: 200_000 }),
});
/** Operations that answered, and how many of each size class did not. */
const survey: fc.Arbitrary<Survey> = fc.record({
	operations: fc.array(operation, { minLength: 2, maxLength: 40 }),
	others: fc.array(fc.nat(30), { minLength: 3, maxLength: 3 }),
});
const kinds = fc.constantFrom<EstimateKind>("total", "mean", "ratio", "proportion");

function talliesOf(operations: Operation[]): Row[] {
	const rows = new Map<string, Row>();
	for (const { county, size, y, x } of operations) {
		const key = `${county} ${size}`;
		const before = rows.get(key) ?? { ...emptyMoments, county, stratumKey: `s${size}` };
		rows.set(key, { ...before, ...addMoments(before, momentsOf([{ y, x }])) });
	}
	return [...rows.values()];
}

function frameOf({ operations, others }: Survey): StrataFrame {
	const answered = [0, 1, 2].map((size) => operations.filter((each) => each.size === size).length);
	const frame = answered.map((n, size) => ({
		stratumKey: `s${size}`,
		stateFips: "06",
		sizeClass: size,
		frameSize: n + others[size]!,
	}));
	return joinStrata(frame, new Map(answered.map((n, size) => [`s${size}`, n])));
}

function estimate(kind: EstimateKind, { frame, rows }: { frame: StrataFrame; rows: Row[] }) {
	return estimateCell({ kind }, frame, rows);
}

/** Figures agree to rounding; a standard error is judged against the figure where it is itself rounding. */
function expectAlike(
	actual: { value: number | null; standardError: number | null },
	expected: { value: number | null; standardError: number | null },
	unit = 1,
) {
	const value = (expected.value ?? 0) * unit;
	expect(actual.value === null).toBe(expected.value === null);
	expect(Math.abs((actual.value ?? 0) - value)).toBeLessThanOrEqual(1e-12 * Math.abs(value));
	expect(actual.standardError === null).toBe(expected.standardError === null);
	const error = (expected.standardError ?? 0) * unit;
	expect(Math.abs((actual.standardError ?? 0) - error)).toBeLessThanOrEqual(1e-9 * error + 1e-8 * Math.abs(value));
}

describe("tallies", () => {
	test("county totals add to the state's, for every split into counties", () => {
		fc.assert(
			fc.property(survey, (all) => {
				const frame = frameOf(all);
				const rows = talliesOf(all.operations);
				const state = estimate("total", { frame, rows });
				const parts = counties.map((county) =>
					estimate("total", { frame, rows: rows.filter((row) => row.county === county) }),
				);
				const sum = parts.reduce((total, { value }) => total + (value ?? 0), 0);
				expect(Math.abs(sum - state.value!)).toBeLessThanOrEqual(1e-12 * state.value!);
				expect(parts.reduce((total, { respondents }) => total + respondents, 0)).toBe(state.respondents);
			}),
		);
	});

	test("a state from its counties' tallies is the state from its operations", () => {
		fc.assert(
			fc.property(survey, kinds, (all, kind) => {
				const frame = frameOf(all);
				const whole = [0, 1, 2].map((size) => ({
					...momentsOf(all.operations.filter((each) => each.size === size)),
					county: "all",
					stratumKey: `s${size}`,
				}));
				expectAlike(estimate(kind, { frame, rows: talliesOf(all.operations) }), estimate(kind, { frame, rows: whole }));
			}),
		);
	});

	test("their order does not matter, nor into how many a county's are split", () => {
		fc.assert(
			fc.property(survey, kinds, fc.array(fc.nat(1000), { minLength: 40, maxLength: 40 }), (all, kind, keys) => {
				const frame = frameOf(all);
				const shuffled = all.operations
					.map((each, i) => ({ each, key: keys[i]! }))
					.toSorted((a, b) => a.key - b.key)
					.map(({ each }) => each);
				const half = Math.floor(shuffled.length / 2);
				const split = [...talliesOf(shuffled.slice(half)), ...talliesOf(shuffled.slice(0, half))];
				const before = estimate(kind, { frame, rows: talliesOf(all.operations) });
				expectAlike(estimate(kind, { frame, rows: split }), before);
			}),
		);
	});
});

describe("any figure", () => {
	test("changes with the unit of what it measures, and with nothing else", () => {
		fc.assert(
			fc.property(survey, kinds, fc.constantFrom(1 / 2000, 42, 0.4536), (all, kind, unit) => {
				const share = kind === "proportion";
				const frame = frameOf(all);
				const scaled = all.operations.map((each) => ({ ...each, y: each.y * unit, x: share ? each.x * unit : each.x }));
				const before = estimate(kind, { frame, rows: talliesOf(all.operations) });
				expectAlike(estimate(kind, { frame, rows: talliesOf(scaled) }), before, share ? 1 : unit);
			}),
		);
	});

	test("has a standard error that is a number and not below 0, whatever the sizes", () => {
		const size = fc.oneof(fc.constant(0), fc.double({ min: 1e-3, max: 1e12, noNaN: true }));
		const wild = fc.record({ county: fc.constantFrom(...counties), size: fc.nat(2), y: size, x: size });
		const any = fc.record({
			operations: fc.array(wild, { minLength: 2, maxLength: 12 }),
			others: fc.array(fc.nat(30), { minLength: 3, maxLength: 3 }),
		});
		fc.assert(
			fc.property(any, fc.constantFrom<EstimateKind>("total", "mean", "ratio"), (all, kind) => {
				const frame = frameOf(all);
				for (const county of counties) {
					const rows = talliesOf(all.operations).filter((row) => row.county === county);
					const { value, standardError } = estimate(kind, { frame, rows });
					if (value !== null) expect(Number.isFinite(value)).toBe(true);
					if (standardError !== null) expect(standardError >= 0 && Number.isFinite(standardError)).toBe(true);
				}
			}),
		);
	});

	test("one respondent never looks precise, in whatever kind of figure", () => {
		fc.assert(
			fc.property(survey, kinds, (all, kind) => {
				const alone = all.operations.map((each, i) => ({ ...each, county: i === 0 ? "001" : "003" }));
				const rows = talliesOf(alone).filter((row) => row.county === "001");
				const { standardError, cv, lower, upper, steadiness } = estimate(kind, { frame: frameOf(all), rows });
				expect({ standardError, cv, lower, upper, steadiness }).toEqual({
					standardError: null,
					cv: null,
					lower: null,
					upper: null,
					steadiness: "rough",
				});
			}),
		);
	});

	test("a fully enumerated stratum adds its total and no variance", () => {
		fc.assert(
			fc.property(survey, fc.array(operation, { minLength: 1, maxLength: 5 }), (all, counted) => {
				const frame = frameOf(all);
				const rows = talliesOf(all.operations);
				const full = { stratumKeys: ["full"], frameSize: counted.length, respondents: counted.length };
				const more = { ...frame, strata: [...frame.strata, full] };
				const before = estimate("total", { frame, rows });
				const after = estimate("total", {
					frame: more,
					rows: [...rows, { ...momentsOf(counted), county: "001", stratumKey: "full" }],
				});
				const added = counted.reduce((sum, { y }) => sum + y, 0);
				expect(after.value).toBeCloseTo(before.value! + added, 4);
				expect(after.standardError).toBe(before.standardError);
			}),
		);
	});
});
