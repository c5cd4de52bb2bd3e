import { expect, test } from "vitest";
import { countyFeatures } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { areaMiddles, middlesOf, type Place } from "./map-places.ts";
import { type Direction, walkOver } from "./map-walk.ts";

/** A chequerboard of nine places, row by row from the north. */
const board: Place[] = [..."abcdefghi"].map((key, index) => ({ key, x: index % 3, y: -Math.floor(index / 3) }));
const directions: Direction[] = ["up", "down", "left", "right"];

/** The middles of the counties as the live map has them. */
function countyMiddles(states?: string[]): Place[] {
	const { features } = countyFeatures(usTopology(), states, 4);
	const counties = features.map((county) => ({ ...county, properties: { fips: String(county.id) } }));
	return middlesOf({ counties: { type: "FeatureCollection", features: counties } });
}

/** All places to which arrow keys lead from where the walk begins. */
function reachedIn(places: Place[]): Set<string> {
	const walk = walkOver(places);
	const reached = new Set<string>();
	const open = [walk(null, "up")!];
	for (let here = open.pop(); here; here = open.pop()) {
		if (reached.has(here)) continue;
		reached.add(here);
		open.push(...directions.map((direction) => walk(here!, direction)!));
	}
	return reached;
}

test("arrow keys walk to the neighbor in their direction", () => {
	const walk = walkOver(board);
	expect(directions.map((direction) => walk("e", direction))).toEqual(["b", "h", "d", "f"]);
});

test("the walk begins in the middle, and stays where it is at the edge", () => {
	expect(walkOver(board)(null, "up")).toBe("e");
	expect(walkOver(board)("c", "right")).toBe("c");
	expect(walkOver([])(null, "up")).toBeNull();
	expect(walkOver(board.slice(0, 1))("a", "down")).toBe("a");
});

test("a place aslant of all its neighbors, which is nobody's nearest, lies on the way to the next one", () => {
	// By distance alone every key from "e" and from its neighbors would pass "z" by.
	const places = [...board, { key: "z", x: 1.45, y: -0.55 }];
	expect(reachedIn(places)).toContain("z");
	const walk = walkOver(places);
	const before = places.flatMap(({ key }) =>
		directions.filter((way) => walk(key, way) === "z").map((way) => [key, way] as const),
	);
	expect(before.length).toBeGreaterThan(0);
	expect(reachedIn(places).size).toBe(places.length);
});

test.each([
	["the whole country", undefined, 3200],
	["four states", ["17", "19", "27", "55"], 300],
] as const)("arrow keys alone reach every county of %s", (_, states, least) => {
	const places = countyMiddles(states && [...states]);
	const reached = reachedIn(places);
	expect(places.length).toBeGreaterThan(least);
	expect(places.filter(({ key }) => !reached.has(key))).toEqual([]);
});

test("districts are walked by their own middles, and counties of none are stepped over", () => {
	const counties = countyMiddles(["19"]);
	// Every third county is in no district; the others are in one of twenty.
	const areaOfCounty = Object.fromEntries(
		counties.map(({ key }, index) => [key, index % 3 ? `district ${index % 20}` : null]),
	);
	const areas = areaMiddles(counties, areaOfCounty);
	expect(areas).toHaveLength(20);
	expect(reachedIn(areas).size).toBe(20);
});
