import { expect, test } from "vitest";
import { estimateSurvey } from "#app/estimate/survey.ts";
import { tallyOf } from "#app/tally/tally.ts";

const frame = [
	{ cropKey: "apple", stratumKey: "IA-small", stateFips: "19", sizeClass: 1, frameSize: 10 },
	{ cropKey: "apple", stratumKey: "IA-large", stateFips: "19", sizeClass: 3, frameSize: 4 },
];
const areasOfCounty = new Map([
	["19169", ["19169", "IA-5", "19", "network"]],
	["19153", ["19153", "IA-5", "19", "network"]],
]);
const tally = (countyFips: string, stratumKey: string, pairs: [number, number][]) => ({
	measureKey: "crop_loss",
	cropKey: "apple",
	countyFips,
	stateFips: "19",
	stratumKey,
	setAside: 0,
	...tallyOf(pairs.map(([y, x]) => ({ y, x }))),
});
const tallies = [
	tally("19169", "IA-small", [
		[20, 100],
		[50, 100],
	]),
	tally("19153", "IA-small", [[0, 100]]),
	tally("19153", "IA-large", [
		[400, 1000],
		[100, 1000],
	]),
];
const loss = { key: "crop_loss", kind: "ratio", scale: 100, unit: "percent" } as const;

test("a ratio told in percent weights each stratum by its frame, by hand", () => {
	const { estimates } = estimateSurvey({ measures: [loss], frame, tallies, areasOfCounty });
	const state = estimates.find((estimate) => estimate.areaKey === "19");
	// Small: 10/3 of 70 lost and 300 normal; large: 4/2 of 500 lost and 2000 normal.
	expect(state?.value).toBeCloseTo((100 * ((10 / 3) * 70 + 2 * 500)) / ((10 / 3) * 300 + 2 * 2000), 10);
	expect(state?.respondents).toBe(5);
});

test("the region equals its only state, and a county without answers has no estimate", () => {
	const { estimates } = estimateSurvey({ measures: [loss], frame, tallies: tallies.slice(0, 1), areasOfCounty });
	const byArea = new Map(estimates.map((estimate) => [estimate.areaKey, estimate]));
	expect([...byArea.keys()].toSorted()).toEqual(["19", "19169", "IA-5", "network"]);
	expect(byArea.get("network")).toEqual({ ...byArea.get("19"), areaKey: "network" });
});

test("a county outside every area is refused", () => {
	expect(() => estimateSurvey({ measures: [loss], frame, tallies, areasOfCounty: new Map() })).toThrow(RangeError);
});
