import { expect, test } from "vitest";
import { draftChecksum, publishedChecksum } from "./checksums.server.ts";
import type { DraftCell, ReleaseMethod } from "./draft.ts";
import { publishedAudit, publishedMethod } from "./published-rows.ts";

const measures = [{ key: "crop_loss", decimals: 0 }] as ReleaseMethod["measures"];
const cell = (changes: Partial<DraftCell> = {}, value = 38.013): DraftCell => ({
	cropKey: "apple",
	areaKey: "19103",
	status: "shown",
	reasons: [],
	respondents: 12,
	figures: [
		{ measureKey: "crop_loss", value, standardError: 2.5, cv: 0.066, lower: 33.1, upper: 42.9, steadiness: "steady" },
	],
	...changes,
});
const hidden = (reason: string): DraftCell =>
	cell({ areaKey: "19113", status: "withheld", reasons: [reason], respondents: null, figures: null });
const sums = (...cells: DraftCell[]) => ({
	draft: draftChecksum(cells),
	published: publishedChecksum({ measures }, cells),
});

test("what is kept back does not move the sum that is told, and moves that of the draft", () => {
	const one = sums(cell());
	for (const changed of [sums(cell({ respondents: 13 })), sums(cell({}, 38.014))]) {
		expect(changed.published).toBe(one.published);
		expect(changed.draft).not.toBe(one.draft);
	}
});

test("whatever is published moves both sums", () => {
	const one = sums(cell());
	for (const changed of [sums(cell({ respondents: 20 })), sums(cell({}, 39)), sums(hidden("shield"))]) {
		expect(changed.published).not.toBe(one.published);
		expect(changed.draft).not.toBe(one.draft);
	}
});

test("the order of cells, and why one is withheld, move neither", () => {
	expect(sums(hidden("too_few_owners"), cell())).toEqual(sums(cell(), hidden("shield")));
});

const counted = { asked: 9, answered: 2 };
const method = {
	season: 2031,
	all: { asked: 40, answered: 25 },
	states: [
		{ ...counted, stateFips: "19" },
		{ ...counted, stateFips: "55" },
	],
	joins: [{ measureKey: "crop_loss", cropKey: "apple", stratumKeys: ["19.small"], step: "state" }],
	calibrations: [],
	measures,
	areas: [],
} as unknown as ReleaseMethod;
const ofAll = (areaKey: string, status: DraftCell["status"]) => cell({ cropKey: "all", areaKey, status });

test("how many answered is told only where the cell of all crops is shown, and joined strata not at all", () => {
	const told = publishedMethod(method, [
		ofAll("network", "shown"),
		ofAll("19", "withheld"),
		cell({ areaKey: "19" }),
		ofAll("55", "shown"),
	]);
	expect(told).toEqual({ season: 2031, all: method.all, states: [{ ...counted, stateFips: "55" }] });
	expect(publishedMethod(method, [ofAll("network", "withheld")])).toEqual({ season: 2031, states: [] });
});

test("of calibrated weights a release tells how far they went in all, and no total of a part of the frame", () => {
	const one = { measureKeys: ["crop_loss"], cropKey: "apple", stateFips: ["19"], respondents: 40, takenTogether: [] };
	const totals = [{ of: "district" as const, group: "test-east", total: 71, byDesign: 68 }];
	const calibrations: ReleaseMethod["calibrations"] = [
		{ ...one, totals, sweeps: 7, smallest: 0.8, largest: 1.4, fallback: null },
		{ ...one, totals, stateFips: ["55"], sweeps: null, smallest: 1, largest: 1, fallback: "too_few" },
	];
	const told = publishedMethod({ ...method, weighting: "raked", calibrations }, []);
	const calibration = { parts: 2, designKept: 1, mostSweeps: 7, smallest: 0.8, largest: 1.4 };
	expect(told).toEqual({ season: 2031, weighting: "raked", calibration, states: [] });
});

test("a release tells how much is withheld, and not for which reason", () => {
	const audit = { passed: true, cells: 9, withheld: 3, withheldForOwnSake: 2, shields: 1, failures: [] };
	expect(publishedAudit(audit as never)).toEqual({ passed: true, cells: 9, withheld: 3 });
});
