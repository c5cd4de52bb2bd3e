import { expect, test } from "vitest";
import { listCounties } from "#app/lib/geography/counties.ts";
import { isContiguous, listNeighbors } from "#app/lib/geography/neighbors.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { listDistricts } from "./reference.ts";
import { states } from "./reference/states.ts";

const neighborsOf = listNeighbors(usTopology());

test("every county of the covered states lies in exactly one district of its own state", () => {
	const counties = listCounties(
		usTopology(),
		states.map((state) => state.stateFips),
	).map((county) => county.countyFips);
	const grouped = listDistricts().flatMap((district) => district.countyFips);
	expect(grouped.toSorted()).toEqual(counties.toSorted());
	for (const { stateFips, countyFips } of listDistricts()) {
		expect(countyFips.every((fips) => fips.startsWith(stateFips))).toBe(true);
	}
});

test.each(listDistricts())("$districtKey has 8 to 12 counties and hangs together", ({ countyFips }) => {
	expect(countyFips.length).toBeGreaterThanOrEqual(8);
	expect(countyFips.length).toBeLessThanOrEqual(12);
	expect(isContiguous(countyFips, neighborsOf)).toBe(true);
});

test("two counties far apart do not hang together", () => {
	expect(isContiguous(["19169", "55029"], neighborsOf)).toBe(false);
});
