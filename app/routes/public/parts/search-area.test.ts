import { expect, test } from "vitest";
import { searchArea } from "./search-area.ts";

const counties = Array.from({ length: 15 }, (_, index) => ({
	areaKey: `19${index}`,
	areaName: index === 0 ? "Story" : `Lake ${index}`,
	kind: "county" as const,
}));
const address = "https://survey.example/map?release=3&area=55001&find=typed";
const search = (typed: string | undefined) =>
	searchArea(address, typed, counties, ({ areaName }) => `${areaName} County`);

/** Where a search leads. */
function ledTo(typed: string): string | null {
	try {
		search(typed);
	} catch (answer) {
		return (answer as Response).headers.get("location");
	}
	return null;
}

test("the name of one area leads to the same map with that area chosen", () => {
	expect(ledTo("story county")).toBe("/map?release=3&area=190");
});

test("no name leads to the same map with none chosen, and a map that is not asked is not searched", () => {
	expect(ledTo("")).toBe("/map?release=3");
	expect(search(undefined)).toBeNull();
});

test("a name that several or none have is told with what was typed, and no list is endless", () => {
	const several = search("lake");
	expect([several?.typed, several?.areas.length, several?.more]).toEqual(["lake", 12, true]);
	expect(search("Nowhere")).toEqual({ typed: "Nowhere", areas: [], more: false });
});
