import { expect, test } from "vitest";
import { countyOfPin } from "./county-of-pin.server.ts";

test("a pin in a town lies in the town's county", () => {
	expect(countyOfPin({ longitude: -93.6319, latitude: 42.0308 })).toBe("19169");
});

test.each([
	["in the middle of Lake Michigan", -87, 43],
	["in another country", -79.38, 43.65],
	["off the globe", -190, 95],
	["that is no number", Number.NaN, 42],
])("a pin %s lies in no county", (_, longitude, latitude) => {
	expect(countyOfPin({ longitude, latitude })).toBeNull();
});
