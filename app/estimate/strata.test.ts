import * as fc from "fast-check";
import { describe, expect, test } from "vitest";
import { joinStrata, respondentsByStratum, unjoined } from "#app/estimate/strata.ts";
import type { FrameStratum } from "#app/tally/tally.ts";

/** Strata of one state from [operations, respondents], smallest class first. */
function state(
	stateFips: string,
	classes: [number, number][],
): { frame: FrameStratum[]; answered: [string, number][] } {
	const key = (i: number) => `${stateFips}.${i + 1}`;
	return {
		frame: classes.map(([frameSize], i) => ({ stratumKey: key(i), stateFips, sizeClass: i + 1, frameSize })),
		answered: classes.map(([, respondents], i) => [key(i), respondents]),
	};
}

function join(...states: ReturnType<typeof state>[]) {
	return joinStrata(
		states.flatMap(({ frame }) => frame),
		new Map(states.flatMap(({ answered }) => answered)),
	);
}

describe("joining strata", () => {
	test("strata with two respondents each stay as they are", () => {
		const { strata, joins } = join(state("55", [[40, 9], [12, 2]])); // prettier-ignore
		expect(joins).toEqual([]);
		expect(strata.map(({ frameSize, respondents }) => [frameSize, respondents])).toEqual([[40, 9], [12, 2]]); // prettier-ignore
	});

	test("a stratum with one respondent joins the next smaller size", () => {
		const { strata, joins } = join(state("55", [[40, 9], [12, 5], [3, 1]])); // prettier-ignore
		expect(joins).toEqual([{ stratumKeys: ["55.2", "55.3"], step: "next_size" }]);
		expect(strata).toContainEqual({ stratumKeys: ["55.2", "55.3"], frameSize: 15, respondents: 6 });
	});

	test("the smallest size joins the next larger", () => {
		const { joins } = join(state("55", [[40, 0], [12, 5], [3, 2]])); // prettier-ignore
		expect(joins).toEqual([{ stratumKeys: ["55.1", "55.2"], step: "next_size" }]);
	});

	test("where the next size is not enough the state becomes one stratum", () => {
		const { strata, joins } = join(state("55", [[40, 9], [12, 0], [3, 1]])); // prettier-ignore
		expect(joins.map(({ step }) => step)).toEqual(["state"]);
		expect(strata).toEqual([{ stratumKeys: ["55.1", "55.2", "55.3"], frameSize: 55, respondents: 10 }]);
	});

	test("a state without enough respondents joins the nearest size elsewhere, and is not lost from the total", () => {
		const { strata, joins } = join(state("19", [[40, 9], [12, 5]]), state("27", [[4, 1]])); // prettier-ignore
		expect(joins).toEqual([{ stratumKeys: ["19.1", "27.1"], step: "network" }]);
		expect(strata.reduce((sum, stratum) => sum + stratum.frameSize, 0)).toBe(56);
	});

	test("sizes without operations are left out and joined to nothing", () => {
		const { strata, joins } = join(state("55", [[40, 9], [0, 0]])); // prettier-ignore
		expect(strata).toHaveLength(1);
		expect(joins).toEqual([]);
	});

	test("no operation is lost or doubled, and each stratum has two respondents if the network has", () => {
		const size = fc.integer({ min: 0, max: 6 }).chain((n) => fc.tuple(fc.constant(n), fc.integer({ min: 0, max: n })));
		const classes = fc.array(size, { minLength: 1, maxLength: 4 });
		fc.assert(
			fc.property(fc.array(classes, { minLength: 1, maxLength: 4 }), (network) => {
				const states = network.map((each, i) => state(String(10 + i), each));
				const { strata } = join(...states);
				const count = (pick: 0 | 1) => network.flat().reduce((sum, pair) => sum + pair[pick], 0);
				expect(strata.reduce((sum, stratum) => sum + stratum.frameSize, 0)).toBe(count(0));
				expect(strata.reduce((sum, stratum) => sum + stratum.respondents, 0)).toBe(count(1));
				const keys = strata.flatMap((stratum) => stratum.stratumKeys);
				expect(new Set(keys).size).toBe(keys.length);
				if (count(1) >= 2) for (const stratum of strata) expect(stratum.respondents).toBeGreaterThanOrEqual(2);
			}),
			{ numRuns: 500 },
		);
	});

	test("a frame that does not fit its respondents is refused", () => {
		const { frame } = state("55", [[3, 0]]);
		expect(() => joinStrata(frame, new Map([["55.1", 4]]))).toThrow("cannot have 4 respondents of 3");
		expect(() => joinStrata(frame, new Map([["55.9", 1]]))).toThrow("not in the frame");
		expect(() => joinStrata([...frame, ...frame], new Map())).toThrow("named twice");
	});
});

test("unjoined strata stay apart whatever their respondents", () => {
	const { frame } = state("55", [[40, 0], [12, 0]]); // prettier-ignore
	expect(unjoined(frame, new Map([["55.1", 1]])).strata.map(({ respondents }) => respondents)).toEqual([1, 0]);
});

test("a stratum's respondents are counted over all its counties", () => {
	const rows = [
		{ stratumKey: "55|small", n: 4 },
		{ stratumKey: "55|large", n: 1 },
		{ stratumKey: "55|small", n: 3 },
	];
	expect([...respondentsByStratum(rows)]).toEqual([
		["55|small", 7],
		["55|large", 1],
	]);
	expect(respondentsByStratum([]).size).toBe(0);
});
