import type { Position } from "geojson";
import { expect, test } from "vitest";
import { countyFeatures, listCounties, stateLines } from "./counties.ts";
import { usTopology } from "./topology.server.ts";

const covered = ["17", "19", "27", "55"];

test("a county is listed with its name and state", () => {
	const story = listCounties(usTopology(), ["19"]).find((county) => county.countyFips === "19169");
	expect(story).toEqual({ countyFips: "19169", stateFips: "19", name: "Story", stateName: "Iowa" });
});

test("an unknown state has no counties", () => {
	expect(listCounties(usTopology(), ["03"])).toEqual([]);
});

/** Twice the area in square degrees, positive where the ring runs counter-clockwise (shoelace formula). */
function signedArea(ring: Position[]): number {
	const [originX = 0, originY = 0] = ring[0] ?? [];
	return ring.reduce((sum, [x = 0, y = 0], index) => {
		const [nextX = 0, nextY = 0] = ring[(index + 1) % ring.length] ?? [];
		return sum + (x - originX) * (nextY - originY) - (nextX - originX) * (y - originY);
	}, 0);
}

test("outer rings run counter-clockwise and holes clockwise, as RFC 7946 asks", () => {
	// Frederick County, Virginia, has a hole: the city of Winchester. Rings that were simplified to a point have area 0.
	let holesSeen = 0;
	for (const { geometry } of countyFeatures(usTopology(), [...covered, "51"]).features) {
		const polygons: Position[][][] = geometry.type === "Polygon" ? [geometry.coordinates] : geometry.coordinates;
		for (const [outer = [], ...holes] of polygons) {
			expect(signedArea(outer)).toBeGreaterThanOrEqual(0);
			for (const hole of holes) expect(signedArea(hole)).toBeLessThanOrEqual(0);
			holesSeen += holes.length;
		}
	}
	expect(holesSeen).toBeGreaterThan(0);
});

test("coordinates keep five decimals at most, and borders still meet", () => {
	const text = JSON.stringify(countyFeatures(usTopology(), covered));
	expect(text).not.toMatch(/\.\d{6}/);
	const [storyPoints, borderPoints] = [["19169"], ["19153"]].map(([fips]) => {
		const feature = countyFeatures(usTopology(), ["19"]).features.find(({ id }) => id === fips);
		return new Set((feature?.geometry.coordinates.flat() ?? []).map((point) => JSON.stringify(point)));
	});
	const shared = [...(storyPoints ?? [])].filter((point) => borderPoints?.has(point));
	expect(shared.length).toBeGreaterThanOrEqual(2);
});

test("the states' lines are made of their counties' own points", () => {
	const points = new Set(
		countyFeatures(usTopology(), ["19"]).features.flatMap(({ geometry }) =>
			geometry.coordinates.flat(geometry.type === "Polygon" ? 1 : 2).map((point) => JSON.stringify(point)),
		),
	);
	const lines = stateLines(usTopology(), ["19"]);
	if (lines.geometry.type !== "MultiLineString") throw new Error("expected lines");
	expect(lines.geometry.coordinates.flat().every((point) => points.has(JSON.stringify(point)))).toBe(true);
});
