import { rewind, truncate } from "@turf/turf";
import type { MultiPolygon, Polygon, Position } from "geojson";
import { merge } from "topojson-client";
import { countyGeometries, type UsTopology } from "./counties.ts";

/**
 * Several counties as one shape without the borders between them, after RFC 7946 as `countyFeatures` has it.
 * @returns null when the topology has none of the counties: an area without a place on the map.
 */
export function joinedCounties(
	topology: UsTopology,
	countyFips: readonly string[],
	decimals: number,
): Polygon | MultiPolygon | null {
	const wanted = new Set(countyFips);
	const geometries = countyGeometries(topology).filter(({ id }) => wanted.has(id));
	if (geometries.length === 0) return null;
	const { coordinates } = merge(topology, geometries as Parameters<typeof merge>[1]);
	const polygons = coordinates.map((polygon) => polygon.map(closed));
	const shape: Polygon | MultiPolygon =
		polygons.length === 1
			? { type: "Polygon", coordinates: polygons[0]! }
			: { type: "MultiPolygon", coordinates: polygons };
	const wound = rewind(shape, { reverse: false }) as Polygon | MultiPolygon;
	return truncate(wound, { precision: decimals, coordinates: 2 });
}

/** Where two counties' borders miss each other by some metres, as in southern Illinois, joining them leaves a ring open. */
function closed(ring: Position[]): Position[] {
	const [first, last] = [ring[0]!, ring.at(-1)!];
	return first[0] === last[0] && first[1] === last[1] ? ring : [...ring, [...first]];
}
