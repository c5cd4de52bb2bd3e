import { geoConicEqualArea, geoMercator, geoPath } from "d3-geo";
import type { FeatureCollection } from "geojson";
import { countyFeatures, stateLines } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { middleOf, planar } from "./geometry.server.ts";

/** A drawn map without its colours: outlines as SVG paths on a sheet of the given size. */
export type Picture = {
	width: number;
	height: number;
	counties: { fips: string; outline: string }[];
	stateLines: string;
	stateNames: { stateFips: string; x: number; y: number }[];
};

const width = 720;
const margin = 6;
const made = new Map<string, Picture>();

/** The outlines of the given states in an equal-area projection, so that no county looks larger than it is. */
export function pictureOf(states: string[]): Picture | null {
	if (states.length === 0) return null;
	const key = states.toSorted().join("-");
	const kept = made.get(key) ?? draw(states.toSorted());
	if (made.size < 20) made.set(key, kept);
	return kept;
}

function draw(states: string[]): Picture {
	const topology = usTopology();
	const features = countyFeatures(topology, states, 4);
	const counties: FeatureCollection = { type: "FeatureCollection", features: features.features.map(planar) };
	const [[west, south], [east, north]] = boundsOf(counties);
	const projection = geoConicEqualArea()
		.parallels([south + (north - south) / 6, north - (north - south) / 6])
		.rotate([-(west + east) / 2, 0])
		.fitWidth(width - 2 * margin, counties);
	const [x, y] = projection.translate();
	projection.translate([x + margin, y + margin]);
	// Whole units are a quarter of a line's width on a screen, and half the bytes.
	const path = geoPath(projection).digits(0);
	const height = Math.ceil(path.bounds(counties)[1][1]) + margin;
	return {
		width,
		height,
		counties: counties.features.map((county) => ({ fips: String(county.id), outline: path(county) ?? "" })),
		stateLines: path(stateLines(topology, states, 4)) ?? "",
		stateNames: states.map((stateFips) => {
			const [nameX, nameY] = projection(middleOf(features, stateFips)) ?? [0, 0];
			return { stateFips, x: Math.round(nameX), y: Math.round(nameY) };
		}),
	};
}

/** West, south, east and north of the outlines, by way of a projection in which degrees of longitude stay straight. */
function boundsOf(counties: FeatureCollection): [[number, number], [number, number]] {
	const flat = geoMercator().scale(1).translate([0, 0]);
	const [[left, top], [right, bottom]] = geoPath(flat).bounds(counties);
	const [west, north] = flat.invert?.([left, top]) ?? [0, 0];
	const [east, south] = flat.invert?.([right, bottom]) ?? [0, 0];
	return [
		[west, south],
		[east, north],
	];
}
