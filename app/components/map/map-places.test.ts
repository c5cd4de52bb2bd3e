import { expect, test } from "vitest";
import { nextCounty, type Place } from "./map-places.ts";
import { outerEdge, pathOfEdges, ringsOfPath } from "./outer-edge.ts";

/** A chequerboard of nine places, row by row from the north. */
const board: Place[] = [..."abcdefghi"].map((fips, index) => ({ fips, x: index % 3, y: -Math.floor(index / 3) }));

test("arrow keys walk to the neighbour in their direction", () => {
	expect(nextCounty(board, "e", "up")).toBe("b");
	expect(nextCounty(board, "e", "down")).toBe("h");
	expect(nextCounty(board, "e", "left")).toBe("d");
	expect(nextCounty(board, "e", "right")).toBe("f");
});

test("the walk begins in the middle, and stays where it is at the edge", () => {
	expect(nextCounty(board, null, "up")).toBe("e");
	expect(nextCounty(board, "c", "right")).toBe("c");
	expect(nextCounty([], null, "up")).toBeNull();
});

test("the border of two squares side by side has six sides: the shared one falls away", () => {
	const rings = ringsOfPath("M0,0L1,0L1,1L0,1ZM1,0L2,0L2,1L1,1Z");
	const edges = outerEdge(rings);
	expect(edges).toHaveLength(6);
	expect(pathOfEdges(edges)).not.toContain("M1,0L1,1");
});
