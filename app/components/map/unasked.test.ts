import { expect, test } from "vitest";
import type { MapColors } from "./map-colors.client.ts";
import type { DrawnCell } from "./map-data.ts";
import { paintedBy } from "./map-style.ts";
import { countUnasked } from "./unasked.ts";

const cell = (areaKey: string, look: DrawnCell["look"], classIndex: number | null = null) =>
	({ areaKey, look, classIndex }) as DrawnCell;
const cells = [cell("19001", "number", 0), cell("19003", "withheld"), cell("19005", "no_growers")];
const areaOfCounty = { 19001: "19001", 19003: "19003", 19005: "19005", 19007: null };
const picture = { counties: ["19001", "19003", "19005", "19007", "27001"].map((fips) => ({ fips })) };

test("a county without a cell is grey on the live map and counted in the legend, whether the release names it or not", () => {
	const colors = { paper: "paper", unasked: "grey", palette: ["", "a", "b", "c", "d", "e", "f"] } as MapColors;
	const { fill } = paintedBy({ cells, classes: [{ from: 1, to: 2, count: 1 }], areaOfCounty }, colors);
	expect(fill).toEqual(["match", ["id"], [19001], "d", [19003, 19005], "paper", "grey"]);
	expect(countUnasked({ picture, areaOfCounty, cells })).toBe(2);
	expect(countUnasked({ picture, areaOfCounty, cells }, "19")).toBe(1);
});
