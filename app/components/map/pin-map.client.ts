import type { GeoJSONSource, LngLatLike, Map as LibraryMap } from "maplibre-gl";
import type { Pin } from "#app/lib/geography/pin.ts";
import { colorsOfPage } from "./map-colors.client.ts";
import { boundsOf, countyAt } from "./map-places.ts";
import type { Direction } from "./map-walk.ts";
import { openMap, type OpenMapOptions } from "./open-map.client.ts";

export type PinMapOptions = OpenMapOptions & {
	/** A tap or an arrow key has put the pin there. */
	onPin: (pin: Pin) => void;
};
export type PinMap = {
	/** Shows the pin where it was typed, or none. */
	show: (pin: Pin | null) => void;
	/** Moves the pin by some pixels, or puts one in the middle of what is seen. */
	step: (direction: Direction, pixels: number) => void;
	/** The FIPS code of the county in which a place lies on this map. */
	countyOf: (pin: Pin) => string | null;
	zoom: (steps: number) => void;
	reset: () => void;
	remove: () => void;
};

const ways: Record<Direction, [number, number]> = { up: [0, -1], down: [0, 1], left: [-1, 0], right: [1, 0] };
const at = ({ longitude, latitude }: Pin): LngLatLike => [longitude, latitude];
/** Ten metres, finer than a finger points. */
const rounded = (degrees: number) => Number(degrees.toFixed(4));

/** Draws a map of the counties on which one pin can be put. @throws where WebGL is missing. */
export async function createPinMap(options: PinMapOptions): Promise<PinMap> {
	const { geometry, onPin } = options;
	const map = await openMap(options);
	addPinLayers(map);
	let pin: Pin | null = null;
	const draw = () => {
		const point = pin && { type: "Point" as const, coordinates: [pin.longitude, pin.latitude] };
		map.getSource<GeoJSONSource>("pin")?.setData(point ?? { type: "FeatureCollection", features: [] });
	};
	const put = ({ lng, lat }: { lng: number; lat: number }) => {
		pin = { longitude: rounded(lng), latitude: rounded(lat) };
		draw();
		onPin(pin);
	};
	map.on("click", (event) => put(event.lngLat));
	const dark = matchMedia("(prefers-color-scheme: dark)");
	const paint = () => paintAll(map);
	dark.addEventListener("change", paint);
	return {
		show(shown) {
			pin = shown;
			draw();
			if (pin && !map.getBounds().contains(at(pin))) map.jumpTo({ center: at(pin) });
		},
		step(direction, pixels) {
			const from = pin ? map.project(at(pin)) : null;
			const [x, y] = ways[direction];
			put(from ? map.unproject([from.x + x * pixels, from.y + y * pixels]) : map.getCenter());
			if (pin && !map.getBounds().contains(at(pin))) map.panTo(at(pin));
		},
		countyOf: ({ longitude, latitude }) => countyAt(geometry, [longitude, latitude]),
		zoom: (steps) => map.easeTo({ zoom: map.getZoom() + steps, duration: 150, ...(pin && { around: at(pin) }) }),
		reset: () => map.fitBounds(boundsOf(geometry), { padding: 16, duration: 150 }),
		remove() {
			dark.removeEventListener("change", paint);
			map.remove();
		},
	};
}

/** The pin is drawn by the map itself: an element laid over it would need styles of its own, which the page refuses. */
function addPinLayers(map: LibraryMap) {
	map.addSource("pin", { type: "geojson", data: { type: "FeatureCollection", features: [] } });
	map.addLayer({ id: "pin-halo", type: "circle", source: "pin", paint: { "circle-radius": 13 } });
	map.addLayer({
		id: "pin-dot",
		type: "circle",
		source: "pin",
		paint: { "circle-radius": 7, "circle-stroke-width": 2 },
	});
	paintAll(map);
}

function paintAll(map: LibraryMap) {
	const colors = colorsOfPage("loss");
	map.setPaintProperty("paper", "background-color", colors.paper);
	map.setPaintProperty("counties", "fill-color", colors.paper);
	map.setPaintProperty("county-lines", "line-color", colors.line);
	map.setPaintProperty("states", "line-color", colors.line);
	map.setPaintProperty("state-names", "text-color", colors.ink);
	map.setPaintProperty("state-names", "text-halo-color", colors.paper);
	map.setPaintProperty("pin-halo", "circle-color", colors.mark);
	map.setPaintProperty("pin-dot", "circle-color", colors.ink);
	map.setPaintProperty("pin-dot", "circle-stroke-color", colors.paper);
}
