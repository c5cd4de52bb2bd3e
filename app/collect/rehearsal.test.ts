import { expect, test } from "vitest";
import { sizeClassOf } from "./frame.ts";
import { plannedTestGrowers } from "./rehearsal.ts";

const iowa = ["19001", "19003", "19005"].map((countyFips) => ({ countyFips, stateFips: "19" }));
const all = ["17", "19", "27", "55"].map((stateFips) => ({ countyFips: `${stateFips}001`, stateFips }));

test("a handful stands in the states of the survey, of every size and with every crop", () => {
	const growers = plannedTestGrowers(["apple", "plum"], iowa);
	expect(growers).toHaveLength(6);
	expect(new Set(growers.map(({ number }) => number)).size).toBe(6);
	const sizes = growers.map(({ plantings }) => sizeClassOf(plantings.reduce((sum, row) => sum + row.bearingTrees, 0)));
	expect(new Set(sizes)).toEqual(new Set(["small", "medium", "large"]));
	expect(new Set(growers.flatMap(({ plantings }) => plantings.map(({ cropKey }) => cropKey))).size).toBe(2);
	expect(new Set(growers.map(({ language }) => language))).toEqual(new Set(["en", "es"]));
});

test("each state has two of them, in a county of its own", () => {
	const growers = plannedTestGrowers(["apple"], all);
	expect(growers).toHaveLength(8);
	for (const { stateFips } of all) expect(growers.filter((one) => one.stateFips === stateFips)).toHaveLength(2);
	expect(growers.every(({ countyFips, stateFips }) => countyFips.startsWith(stateFips))).toBe(true);
	expect(growers.every(({ plantings }) => plantings.length === 1)).toBe(true);
});
