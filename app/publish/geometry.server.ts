import { geoCentroid } from "d3-geo";
import type { FeatureCollection } from "geojson";
import { countyFeatures, listCounties, stateLines } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { entityTag } from "./cached-json.server.ts";

/** Four decimals of a degree are about ten metres, finer than the outlines are. */
const decimals = 4;

export type MapGeometry = {
	/** Numeric ids, which the map library needs: the FIPS code read as a number. */
	counties: FeatureCollection;
	stateLines: FeatureCollection;
	stateNames: FeatureCollection;
};

const made = new Map<string, { body: string; version: string }>();

/** The geometry file of the given states with its version, made once a process for each set of states. */
export function countiesFile(states: string[]): { body: string; version: string } | undefined {
	const key = states.toSorted().join("-");
	const kept = made.get(key);
	if (kept) return kept;
	const known = new Set(listCounties(usTopology()).map((county) => county.stateFips));
	if (states.length === 0 || states.some((state) => !known.has(state))) return undefined;
	const body = JSON.stringify(makeGeometry(states.toSorted()));
	const file = { body, version: entityTag(body).slice(1, 13) };
	// A handful of networks at most; whoever asks for other sets of states must not fill the memory.
	if (made.size < 20) made.set(key, file);
	return file;
}

/** Where a page finds the geometry of its states: the address changes when the file does. */
export function countiesAddress(states: string[]): string | null {
	const file = countiesFile(states);
	return file ? `/map/counties.json?states=${states.toSorted().join("-")}&version=${file.version}` : null;
}

function makeGeometry(states: string[]): MapGeometry {
	const topology = usTopology();
	const counties = countyFeatures(topology, states, decimals);
	const names = new Map(listCounties(topology, states).map((county) => [county.stateFips, county.stateName]));
	return {
		counties: {
			type: "FeatureCollection",
			features: counties.features.map(({ id, geometry, properties }) => ({
				type: "Feature",
				id: Number(id),
				properties: { fips: String(id), name: properties.name },
				geometry,
			})),
		},
		stateLines: {
			type: "FeatureCollection",
			features: [stateLines(topology, states, decimals) as FeatureCollection["features"][number]],
		},
		stateNames: {
			type: "FeatureCollection",
			features: states.map((state) => ({
				type: "Feature",
				properties: { name: names.get(state) ?? state },
				geometry: { type: "Point", coordinates: middleOf(counties, state) },
			})),
		},
	};
}

/** The middle of a state's counties: a good place for its name, as counties are of like size. */
export function middleOf(counties: ReturnType<typeof countyFeatures>, state: string): [number, number] {
	const middles = counties.features
		.filter((county) => county.properties.stateFips === state)
		.map((county) => geoCentroid({ type: "FeatureCollection", features: [planar(county)] } as never));
	const mean = (index: 0 | 1) => middles.reduce((sum, middle) => sum + middle[index], 0) / middles.length;
	return [Number(mean(0).toFixed(decimals)), Number(mean(1).toFixed(decimals))];
}

const turn = (polygon: number[][][]) => polygon.map((ring) => ring.toReversed());

/** d3-geo reads rings clockwise, GeoJSON's standard writes them counter-clockwise; unturned, a county is the rest of the globe. */
export function planar<F extends ReturnType<typeof countyFeatures>["features"][number]>(county: F): F {
	const { geometry } = county;
	const coordinates =
		geometry.type === "Polygon" ? turn(geometry.coordinates) : geometry.coordinates.map((polygon) => turn(polygon));
	return { ...county, geometry: { ...geometry, coordinates } } as F;
}
