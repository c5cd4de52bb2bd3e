import type { GeometryAnswer } from "./map-data.ts";

/** A county or another area of a map by its key, and where its middle lies. */
export type Place = { key: string; x: number; y: number };
type Box = [west: number, south: number, east: number, north: number];
type Shape = { properties: { fips: string }; geometry: { coordinates: unknown } };

const featuresOf = (geometry: Pick<GeometryAnswer, "counties">) =>
	(geometry.counties as unknown as { features: Shape[] }).features;

/** Every pair of numbers in nested coordinates. */
function positions(nested: unknown): [number, number][] {
	if (!Array.isArray(nested)) return [];
	if (typeof nested[0] === "number") return [nested as [number, number]];
	return nested.flatMap(positions);
}

/** Every ring in nested coordinates. */
function ringsIn(nested: unknown): [number, number][][] {
	if (!Array.isArray(nested)) return [];
	return typeof nested[0]?.[0] === "number" ? [nested as [number, number][]] : nested.flatMap(ringsIn);
}

/** Every ring of the named counties. */
export function ringsOf(geometry: Pick<GeometryAnswer, "counties">, fips: ReadonlySet<string>): [number, number][][] {
	return featuresOf(geometry)
		.filter(({ properties }) => fips.has(properties.fips))
		.flatMap(({ geometry: { coordinates } }) => ringsIn(coordinates));
}

/** The county whose outline goes around a place, as the map draws it; null where none does. */
export function countyAt(geometry: Pick<GeometryAnswer, "counties">, [x, y]: [number, number]): string | null {
	const around = featuresOf(geometry).find(({ geometry: { coordinates } }) => {
		// A hole's ring counts too: what lies in the hole is gone around twice, and so not at all.
		const crossed = ringsIn(coordinates).flatMap((ring) =>
			ring.filter((from, index) => {
				const to = ring[(index + 1) % ring.length] ?? from;
				return from[1] > y !== to[1] > y && x < from[0] + ((y - from[1]) / (to[1] - from[1])) * (to[0] - from[0]);
			}),
		);
		return crossed.length % 2 === 1;
	});
	return around?.properties.fips ?? null;
}

function boxOf(points: [number, number][]): Box {
	const box: Box = [Infinity, Infinity, -Infinity, -Infinity];
	for (const [x, y] of points) {
		box[0] = Math.min(box[0], x);
		box[1] = Math.min(box[1], y);
		box[2] = Math.max(box[2], x);
		box[3] = Math.max(box[3], y);
	}
	return box;
}

/** West, south, east and north of all counties, or of one state's. */
export function boundsOf(geometry: Pick<GeometryAnswer, "counties">, state: string | null = null): Box {
	const within = featuresOf(geometry).filter(({ properties }) => state === null || properties.fips.startsWith(state));
	return boxOf(within.flatMap(({ geometry: { coordinates } }) => positions(coordinates)));
}

/** The middle of each county's box, as steps from the map's middle; a step east is as long as a step north. */
export function middlesOf(geometry: Pick<GeometryAnswer, "counties">): Place[] {
	const [left, , right] = boundsOf(geometry);
	return featuresOf(geometry).map(({ properties, geometry: { coordinates } }) => {
		const [west, south, east, north] = boxOf(positions(coordinates));
		const y = (south + north) / 2;
		return { key: properties.fips, x: ((west + east - left - right) / 2) * Math.cos((y * Math.PI) / 180), y };
	});
}

/** The middle of each area that is drawn, which is that of its counties' middles. */
export function areaMiddles(counties: readonly Place[], areaOfCounty: Record<string, string | null>): Place[] {
	const within = new Map<string, Place[]>();
	for (const county of counties) {
		const areaKey = areaOfCounty[county.key];
		if (areaKey) within.set(areaKey, [...(within.get(areaKey) ?? []), county]);
	}
	return [...within].map(([key, of]) => ({ key, x: meanOf(of, "x"), y: meanOf(of, "y") }));
}

const meanOf = (places: readonly Place[], axis: "x" | "y") =>
	places.reduce((sum, place) => sum + place[axis], 0) / places.length;
