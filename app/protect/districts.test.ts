import { expect, test } from "vitest";
import { isContiguous } from "#app/lib/geography/neighbors.ts";
import { proposeDistricts } from "./districts.ts";
import type { Holding } from "./holdings.ts";
import { defaultRules } from "./rules.ts";

/** Counties in one row from west to east, each the neighbour of the next. */
const row = (count: number) => Array.from({ length: count }, (_, at) => `c${at + 1}`);
const along = (counties: readonly string[]) =>
	new Map(
		counties.map((county, at) => [county, [counties[at - 1], counties[at + 1]].filter((one) => one !== undefined)]),
	);
/** So many owners of one crop in each county, with 100 lb each. */
const grown = (owners: Record<string, number>, cropKey = "apple"): Holding[] =>
	Object.entries(owners).flatMap(([areaKey, count]) =>
		Array.from({ length: count }, (_, at) => ({
			owner: `${areaKey}-${cropKey}-${at}`,
			areaKey,
			cropKey,
			amounts: { lb: 100 },
		})),
	);
const propose = (counties: readonly string[], holdings: Holding[], more: { mostCounties?: number } = {}) =>
	proposeDistricts({
		counties: counties.map((areaKey) => ({ areaKey, group: areaKey })),
		neighborsOf: along(counties),
		holdings,
		quantities: ["lb"],
		rules: defaultRules,
		...more,
	});

test("neighbours with too few owners each are joined until they may be shown, and those with enough stay alone", () => {
	const { districts, before, after } = propose(row(4), grown({ c1: 9, c2: 2, c3: 3, c4: 9 }));
	expect(districts).toEqual([["c1"], ["c2", "c3"], ["c4"]]);
	expect(before).toEqual({ districts: 4, shown: 4, withheld: 4, told: ["c1", "c4"], untold: ["c2", "c3"] });
	expect(after).toEqual({ districts: 3, shown: 6, withheld: 0, told: row(4), untold: [] });
});

test("three counties are joined where no two of them have owners enough", () => {
	expect(propose(row(3), grown({ c1: 2, c2: 2, c3: 2 })).districts).toEqual([["c1", "c2", "c3"]]);
});

test("a county whose own owner dominates it is joined where others outweigh this owner", () => {
	const large = { owner: "large", areaKey: "c1", cropKey: "apple", amounts: { lb: 900 } };
	const { districts, after } = propose(
		row(2),
		[large, ...grown({ c1: 5, c2: 9 }).map((one) => one)].map((one) =>
			one.areaKey === "c1" && one.owner !== "large" ? { ...one, amounts: { lb: 10 } } : one,
		),
	);
	expect(districts).toEqual([["c1", "c2"]]);
	expect(after.withheld).toBe(0);
});

test("counties that do not touch are never joined, nor more of them than is allowed", () => {
	const counties = row(3);
	const apart = proposeDistricts({
		counties: counties.map((areaKey) => ({ areaKey, group: areaKey })),
		neighborsOf: new Map([["c1", ["c3", "elsewhere"]]]),
		holdings: grown({ c1: 2, c2: 3 }),
		quantities: ["lb"],
		rules: defaultRules,
	});
	expect(apart.districts.some((group) => group.includes("c1") && group.includes("c2"))).toBe(false);
	const most = propose(row(9), grown(Object.fromEntries(row(9).map((county) => [county, 1]))), { mostCounties: 3 });
	expect(Math.max(...most.districts.map((group) => group.length))).toBeLessThanOrEqual(3);
});

test("every county is in one district that hangs together, and the proposal is never worse than none", () => {
	const counties = row(30);
	const owners = Object.fromEntries(counties.map((county, at) => [county, (at * 7) % 6]));
	const { districts, before, after } = propose(counties, [...grown(owners), ...grown({ c3: 4, c4: 1, c9: 2 }, "plum")]);
	expect(districts.flat().toSorted()).toEqual(counties.toSorted());
	for (const group of districts) expect(isContiguous(group, along(counties)), group.join(" ")).toBe(true);
	expect(after.told.length).toBeGreaterThan(before.told.length);
	expect(after.withheld).toBeLessThan(before.withheld);
});

test("today's districts are what the proposal is compared with", () => {
	const counties = row(4);
	const { before } = proposeDistricts({
		counties: counties.map((areaKey, at) => ({ areaKey, group: at < 2 ? "west" : "east" })),
		neighborsOf: along(counties),
		holdings: grown({ c1: 3, c2: 3, c3: 1, c4: 1 }),
		quantities: ["lb"],
		rules: defaultRules,
	});
	expect(before).toEqual({ districts: 2, shown: 2, withheld: 2, told: ["c1", "c2"], untold: ["c3", "c4"] });
});
