import { expect, test } from "vitest";
import { areasNamed } from "./areas-named.ts";

const counties = [
	["Story", "Iowa"],
	["Storey", "Nevada"],
	["Washington", "Iowa"],
	["Washington", "Wisconsin"],
	["Doña Ana", "New Mexico"],
	["Iowa", "Wisconsin"],
].map(([areaName, state]) => ({ areaName: areaName!, state: state! }));
const found = (typed: string) =>
	areasNamed(counties, typed, ({ areaName, state }) => `${areaName} County, ${state}`).map(
		({ areaName, state }) => `${areaName}, ${state}`,
	);

test.each([
	["in full", "Story County, Iowa", ["Story, Iowa"]],
	["in full without its comma and capitals", " story county iowa ", ["Story, Iowa"]],
	["by its name alone, though the name begins others", "Story", ["Story, Iowa"]],
	["by a name that two have", "washington", ["Washington, Iowa", "Washington, Wisconsin"]],
	["by some words of it", "washington wis", ["Washington, Wisconsin"]],
	["without its accents", "dona ana", ["Doña Ana, New Mexico"]],
	["that is a state's name too", "iowa", ["Iowa, Wisconsin"]],
	["that nobody has", "Nowhere", []],
	["of no letters", " , ", []],
])("an area is found %s", (_, typed, names) => {
	expect(found(typed)).toEqual(names);
});
