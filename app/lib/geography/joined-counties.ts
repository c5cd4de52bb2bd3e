import { rewind, truncate } from "@turf/turf";
import type { MultiPolygon, Polygon } from "geojson";
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
	const joined = merge(topology, geometries as Parameters<typeof merge>[1]);
	const shape =
		joined.coordinates.length === 1 ? { type: "Polygon" as const, coordinates: joined.coordinates[0]! } : joined;
	const wound = rewind(shape, { reverse: false }) as Polygon | MultiPolygon;
	return truncate(wound, { precision: decimals, coordinates: 2 });
}
