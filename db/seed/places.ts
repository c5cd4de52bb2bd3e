import { centroid } from "@turf/turf";
import { countyFeatures } from "#app/lib/geography/counties.ts";
import { usTopology } from "#app/lib/geography/topology.server.ts";
import { states } from "#db/reference/states.ts";

/** A county with its middle, in degrees. */
export type Place = { countyFips: string; longitude: number; latitude: number };

/** All counties of the network, ordered by FIPS code. */
export function listPlaces(): Place[] {
	const features = countyFeatures(
		usTopology(),
		states.map(({ stateFips }) => stateFips),
		null,
	).features;
	return features.map((county) => {
		const [longitude = 0, latitude = 0] = centroid(county).geometry.coordinates;
		return { countyFips: String(county.id), longitude, latitude };
	});
}

const kilometersPerDegree = 111.2;

/** How far a place lies east and north of a point, in kilometres; flat, which is near enough within four states. */
export function offsetFrom(
	point: { longitude: number; latitude: number },
	place: { longitude: number; latitude: number },
): { east: number; north: number } {
	const shrink = Math.cos((point.latitude * Math.PI) / 180);
	return {
		east: (place.longitude - point.longitude) * kilometersPerDegree * shrink,
		north: (place.latitude - point.latitude) * kilometersPerDegree,
	};
}

// Where the demo's fruit is grown, with how much of it. Invented: the counties are real, the orchards are not.
const hubs = [
	{ longitude: -91.6, latitude: 43.9, strength: 1 },
	{ longitude: -93.6, latitude: 44.8, strength: 1 },
	{ longitude: -94.4, latitude: 45.5, strength: 0.5 },
	{ longitude: -87.7, latitude: 44.6, strength: 1 },
	{ longitude: -90.8, latitude: 43.4, strength: 1 },
	{ longitude: -89.4, latitude: 43.0, strength: 1 },
	{ longitude: -91.9, latitude: 42.6, strength: 0.9 },
	{ longitude: -93.5, latitude: 41.9, strength: 1 },
	{ longitude: -91.4, latitude: 41.7, strength: 1 },
	{ longitude: -95.3, latitude: 41.1, strength: 0.6 },
	{ longitude: -89.0, latitude: 42.2, strength: 1 },
	{ longitude: -90.9, latitude: 39.9, strength: 0.6 },
	{ longitude: -90.0, latitude: 38.8, strength: 0.9 },
	{ longitude: -89.2, latitude: 37.6, strength: 0.6 },
] as const;
const reachKm = 48;
/** Growers far from every hub: one here, two there. */
const anywhere = 0.0025;

/** Counties with the weight of their share of the growers. */
export function weighPlaces(places: readonly Place[]): [Place, number][] {
	return places.map((place) => {
		const near = hubs.reduce((sum, hub) => {
			const { east, north } = offsetFrom(hub, place);
			return sum + hub.strength * Math.exp(-(east ** 2 + north ** 2) / reachKm ** 2);
		}, 0);
		// Cut off and nearly alike inside, so that most counties of a hub have enough growers to be shown.
		return [place, (near < 0.3 ? 0 : 0.6 + near / 5) + anywhere];
	});
}
