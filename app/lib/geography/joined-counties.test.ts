import { check } from "@placemarkio/check-geojson";
import { expect, test } from "vitest";
import { groupBy } from "../group-by.ts";
import { listCounties } from "./counties.ts";
import { joinedCounties } from "./joined-counties.ts";
import { usTopology } from "./topology.server.ts";

// Joined as they come, the counties of Illinois leave their outline open by some ninety metres.
test("every state's counties joined are an outline as the standard has it, and so are those of several states", () => {
	const counties = groupBy(listCounties(usTopology()), ({ stateFips }) => stateFips);
	const fipsOf = (state: string) => counties.get(state)!.map(({ countyFips }) => countyFips);
	const groups = [...[...counties.keys()].map(fipsOf), ["17", "19", "27", "55"].flatMap(fipsOf)];
	for (const group of groups) {
		const geometry = joinedCounties(usTopology(), group, 4);
		expect(() => check(JSON.stringify({ type: "Feature", properties: {}, geometry })), group[0]).not.toThrow();
	}
});
