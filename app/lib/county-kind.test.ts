import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { countyKind } from "./county-kind.ts";

test.each([
	["19169", "county"],
	["22071", "parish"],
	["02122", "borough"],
	["02020", "municipality"],
	["02110", "city_and_borough"],
	["02290", "census_area"],
	["51161", "county"],
	["51770", "city"],
	["24510", "city"],
	["29510", "city"],
	["48501", "county"],
	["48507", "county"],
	["32510", "bare"],
	["11001", "bare"],
])("%s is called a %s", (fips, kind) => {
	expect(countyKind(fips)).toBe(kind);
});

test("the map's areas are as many of each kind as the Census Bureau counted in 2017", () => {
	const atlas = JSON.parse(readFileSync("node_modules/us-atlas/counties-10m.json", "utf8"));
	const counted: Record<string, number> = {};
	for (const { id } of atlas.objects.counties.geometries as { id: string }[]) {
		if (Number(id) >= 57_000) continue; // the territories, which no map shows
		const kind = countyKind(id);
		counted[kind] = (counted[kind] ?? 0) + 1;
	}
	// 3,142: 3,007 counties, 64 parishes, 19 boroughs of three kinds and 10 census areas in Alaska, 41 independent cities, one of them Carson City, and the District.
	expect(counted).toEqual({
		county: 3007,
		parish: 64,
		borough: 13,
		city_and_borough: 4,
		census_area: 10,
		municipality: 2,
		city: 40,
		bare: 2,
	});
});
