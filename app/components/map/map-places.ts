import type { GeometryAnswer } from "./map-data.ts";

export type Place = { fips: string; x: number; y: number };
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
		return { fips: properties.fips, x: ((west + east - left - right) / 2) * Math.cos((y * Math.PI) / 180), y };
	});
}

const ways = { up: [0, 1], down: [0, -1], left: [-1, 0], right: [1, 0] } as const;

/**
 * The county to which an arrow key leads: the nearest whose middle lies in that direction, what lies aside counting
 * double. From nowhere the walk begins in the middle of the map; at the map's edge it stays where it is.
 */
export function nextCounty(places: Place[], fips: string | null, direction: keyof typeof ways): string | null {
	const here = places.find((place) => place.fips === fips);
	if (!here) return middleOf(places)?.fips ?? null;
	const [wayX, wayY] = ways[direction];
	let best: { fips: string; cost: number } | null = null;
	for (const place of places) {
		const [x, y] = [place.x - here.x, place.y - here.y];
		const ahead = x * wayX + y * wayY;
		const aside = Math.abs(x * wayY) + Math.abs(y * wayX);
		if (ahead <= 1e-6 || aside > 1.5 * ahead) continue;
		const cost = ahead + 2 * aside;
		if (!best || cost < best.cost) best = { fips: place.fips, cost };
	}
	return best?.fips ?? here.fips;
}

function middleOf(places: Place[]): Place | undefined {
	const mean = (read: (place: Place) => number) => places.reduce((sum, place) => sum + read(place), 0) / places.length;
	const [x, y] = [mean((place) => place.x), mean((place) => place.y)];
	const far = (place: Place) => (place.x - x) ** 2 + (place.y - y) ** 2;
	return places.toSorted((a, b) => far(a) - far(b))[0];
}
