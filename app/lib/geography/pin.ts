import { bbox, booleanPointInPolygon } from "@turf/turf";
import type { CountyFeature } from "./counties.ts";

/** WGS 84 degrees; west and south are negative. */
export type Pin = { longitude: number; latitude: number };

/**
 * Makes the lookup from a pin to its county. A pin on water that the outlines leave out, or outside the given counties,
 * has none: null. The pin is used for this and nothing else.
 */
export function countyFinder(features: readonly CountyFeature[]): (pin: Pin) => string | null {
	const boxes = features.map((feature) => ({ feature, box: bbox(feature) }));
	return ({ longitude, latitude }) => {
		if (!(Math.abs(longitude) <= 180) || !(Math.abs(latitude) <= 90)) return null;
		const hit = boxes.find(({ feature, box: [west, south, east, north] }) => {
			// The box rules out almost every county, at a hundredth of the cost of following its outline.
			if (longitude < west || longitude > east || latitude < south || latitude > north) return false;
			return booleanPointInPolygon([longitude, latitude], feature);
		});
		return hit ? String(hit.feature.id) : null;
	};
}
