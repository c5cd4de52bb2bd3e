import { geoIdentity, geoPath } from "d3-geo";
import { expect, test } from "vitest";
import { pointsOfPath, shortPath } from "./short-path.ts";

const drawn = (shape: Parameters<ReturnType<typeof geoPath>>[0]) =>
	shortPath((context) => geoPath(geoIdentity(), context as never)(shape));
const ring = (...points: [number, number][]) => [...points, points[0]!];

test("a path of steps leads through the points of its shape, and each shape of several is closed", () => {
	const coordinates = [[ring([10, 10], [30, 10], [30, 40])], [ring([50, 5], [60, 5], [55, 20], [52, 18])]];
	const path = drawn({ type: "MultiPolygon", coordinates });
	expect(path).toBe("M10,10l20,0 0,30zM50,5l10,0 -5,15 -3,-2z");
	expect(pointsOfPath(path)).toEqual(coordinates.map(([points]) => points!.slice(0, -1)));
});

test("points that fall on the one before and islands of less than a pixel are left out", () => {
	const island = ring([70.1, 70.1], [70.4, 70.1], [70.4, 70.4]);
	const shape = ring([10.2, 10.1], [10.4, 9.8], [30, 10], [30.3, 40.4], [30.1, 40.2]);
	expect(drawn({ type: "MultiPolygon", coordinates: [[island], [shape]] })).toBe("M10,10l20,0 0,30z");
	expect(drawn({ type: "Polygon", coordinates: [island] })).toBe("M70,70z");
});

test("a line stays open, and nothing drawn is no path", () => {
	const line = [
		[1, 1],
		[2, 5],
		[2.2, 5.1],
		[7, 5],
	];
	expect(drawn({ type: "LineString", coordinates: line })).toBe("M1,1l1,4 5,0");
	expect(shortPath(() => {})).toBe("");
});
