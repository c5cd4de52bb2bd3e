import { expect, test } from "vitest";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { countyFeatures } from "#app/lib/geography/counties.ts";
import { countyOfPin } from "#app/lib/geography/county-of-pin.server.ts";
import { pointsOfPath } from "#app/lib/geography/short-path.ts";
import { countyAt } from "./map-places.ts";
import { outerEdge, pathOfEdges } from "./outer-edge.ts";

test("the border of two squares side by side has six sides: the shared one falls away", () => {
	const rings = pointsOfPath("M0,0l1,0 0,1 -1,0zM1,0l1,0 0,1 -1,0z");
	const edges = outerEdge(rings);
	expect(edges).toHaveLength(6);
	expect(pathOfEdges(edges)).not.toContain("M1,0L1,1");
});

test("the map names the county of a place as the server finds it, and none outside", () => {
	const { features } = countyFeatures(usTopology(), ["19", "55"], 4);
	const counties = {
		type: "FeatureCollection" as const,
		features: features.map((county) => ({ ...county, properties: { fips: String(county.id) } })),
	};
	// A grid over both states, clear of the borders' last digits by its odd steps.
	let found = 0;
	for (let x = -96.513; x < -87; x += 0.371) {
		for (let y = 40.613; y < 46.9; y += 0.373) {
			const server = countyOfPin({ longitude: x, latitude: y });
			const expected = server && /^(19|55)/.test(server) ? server : null;
			expect(countyAt({ counties }, [x, y]), `${x} ${y}`).toBe(expected);
			if (expected) found += 1;
		}
	}
	expect(found).toBeGreaterThan(100);
});
