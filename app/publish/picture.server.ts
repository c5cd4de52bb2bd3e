import { type GeoContext, geoConicEqualArea, geoMercator, geoPath, type GeoPermissibleObjects } from "d3-geo";
import type { FeatureCollection } from "geojson";
import { countyFeatures, stateLines } from "#app/lib/geography/counties.ts";
import { shortPath } from "#app/lib/geography/short-path.ts";
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
const focusHeight = 600;
const made = new Map<string, Picture>();

/**
 * The outlines of the given states in an equal-area projection, so that no county looks larger than it is.
 * @param focus the state that the sheet is filled with, what lies around it running on to the sheet's edge.
 */
export function pictureOf(states: string[], focus: string | null = null): Picture | null {
	if (states.length === 0) return null;
	const key = `${states.toSorted().join("-")} ${focus}`;
	const kept = made.get(key) ?? draw(states.toSorted(), focus);
	if (made.size < 60) made.set(key, kept);
	return kept;
}

function draw(states: string[], focus: string | null): Picture {
	const topology = usTopology();
	const features = countyFeatures(topology, states, 4);
	const counties: FeatureCollection = { type: "FeatureCollection", features: features.features.map(planar) };
	const { projection, height } = projected(counties, focus);
	// Whole units are a quarter of a line's width on a screen.
	const path = (shape: GeoPermissibleObjects) =>
		shortPath((context) => geoPath(projection, context as GeoContext)(shape));
	const outlines = counties.features.map((county) => ({ fips: String(county.id), outline: path(county) }));
	return {
		width,
		height,
		counties: outlines.filter(({ outline }) => outline !== ""),
		stateLines: path(stateLines(topology, states, 4)),
		stateNames: states.flatMap((stateFips) => {
			const [x, y] = (projection(middleOf(features, stateFips)) ?? [0, 0]).map(Math.round) as [number, number];
			return x < 0 || x > width || y < 0 || y > height ? [] : [{ stateFips, x, y }];
		}),
	};
}

/** A sheet that all counties fill, or one of a wide page's shape that those of one state fill. */
function projected(counties: FeatureCollection, focus: string | null) {
	const features = counties.features.filter(({ id }) => focus === null || String(id).startsWith(focus));
	const filling: FeatureCollection = { type: "FeatureCollection", features };
	const [[west, south], [east, north]] = boundsOf(filling);
	const projection = geoConicEqualArea()
		.parallels([south + (north - south) / 6, north - (north - south) / 6])
		.rotate([-(west + east) / 2, 0]);
	if (focus !== null) {
		const frame = [
			[-margin, -margin],
			[width + margin, focusHeight + margin],
		] as [[number, number], [number, number]];
		const inner = [
			[4 * margin, 4 * margin],
			[width - 4 * margin, focusHeight - 4 * margin],
		] as typeof frame;
		return { projection: projection.fitExtent(inner, filling).clipExtent(frame), height: focusHeight };
	}
	projection.fitWidth(width - 2 * margin, filling);
	const [x, y] = projection.translate();
	projection.translate([x + margin, y + margin]);
	return { projection, height: Math.ceil(geoPath(projection).bounds(filling)[1][1]) + margin };
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
