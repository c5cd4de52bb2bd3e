import { rewind, truncate } from "@turf/turf";
import type { Feature, FeatureCollection, MultiPolygon, Polygon } from "geojson";
import { feature, mesh } from "topojson-client";
import type {
	GeometryCollection,
	MultiPolygon as TopoMultiPolygon,
	Polygon as TopoPolygon,
} from "topojson-specification";
import type { Topology } from "topojson-specification";

type Named = GeometryCollection<{ name: string }>;
export type UsTopology = Topology<{ counties: Named; states: Named; nation: GeometryCollection }>;

export type County = { countyFips: string; stateFips: string; name: string; stateName: string };
export type CountyFeature = Feature<Polygon | MultiPolygon, { name: string; stateFips: string }>;
/** A county or a state: in the file both have an id and a name, which the general type leaves open. */
type NamedGeometry = (TopoPolygon | TopoMultiPolygon) & { id: string; properties: { name: string } };

/** The county geometries of the given states, or all, in the topology's own order. */
export function countyGeometries(topology: UsTopology, stateFips?: readonly string[]): NamedGeometry[] {
	const all = topology.objects.counties.geometries as NamedGeometry[];
	if (!stateFips) return all;
	const wanted = new Set(stateFips);
	return all.filter((geometry) => wanted.has(geometry.id.slice(0, 2)));
}

/** Counties of the given states (all without them), ordered by FIPS code. */
export function listCounties(topology: UsTopology, stateFips?: readonly string[]): County[] {
	const states = topology.objects.states.geometries as NamedGeometry[];
	const stateNames = new Map(states.map((state) => [state.id, state.properties.name]));
	return countyGeometries(topology, stateFips)
		.map(({ id, properties }) => {
			const state = id.slice(0, 2);
			return { countyFips: id, stateFips: state, name: properties.name, stateName: stateNames.get(state) ?? state };
		})
		.toSorted((a, b) => a.countyFips.localeCompare(b.countyFips));
}

/**
 * County polygons as GeoJSON after RFC 7946: WGS 84 degrees, longitude first, outer rings counter-clockwise.
 * @param decimals kept of a degree; 5 is about a metre and shrinks the file, null leaves the topology's own.
 * @returns features whose `id` is the county's FIPS code, ordered by it.
 */
export function countyFeatures(
	topology: UsTopology,
	stateFips?: readonly string[],
	decimals: number | null = 5,
): FeatureCollection<Polygon | MultiPolygon, CountyFeature["properties"]> {
	const features = countyGeometries(topology, stateFips).map((geometry): CountyFeature => {
		const shape = feature(topology, geometry) as Feature<Polygon | MultiPolygon>;
		const wound = rewind(shape, { reverse: false }) as Feature<Polygon | MultiPolygon>;
		const { geometry: outline } = decimals === null ? wound : truncate(wound, { precision: decimals, coordinates: 2 });
		return {
			type: "Feature",
			id: geometry.id,
			properties: { name: geometry.properties.name, stateFips: geometry.id.slice(0, 2) },
			geometry: outline,
		};
	});
	return {
		type: "FeatureCollection",
		features: features.toSorted((a, b) => String(a.id).localeCompare(String(b.id))),
	};
}

/** The lines between and around the given states, made of the same points as their counties' borders. */
export function stateLines(topology: UsTopology, stateFips: readonly string[], decimals = 5): Feature {
	const wanted = new Set(stateFips);
	const geometries = topology.objects.states.geometries.filter((state) => wanted.has(String(state.id)));
	const lines = mesh(topology, { type: "GeometryCollection", geometries } as never);
	return truncate({ type: "Feature", properties: {}, geometry: lines }, { precision: decimals, coordinates: 2 });
}
