import "maplibre-gl/dist/maplibre-gl.css";
import { Map as LibraryMap, setWorkerUrl } from "maplibre-gl";
import workerUrl from "maplibre-gl/dist/maplibre-gl-worker.mjs?url";
import { colorsOfPage } from "./map-colors.client.ts";
import type { GeometryAnswer } from "./map-data.ts";
import { boundsOf } from "./map-places.ts";
import { mapStyle } from "./map-style.ts";

setWorkerUrl(workerUrl);

export type OpenMapOptions = {
	container: HTMLElement;
	geometry: GeometryAnswer;
	/** The map library's own sentences, in the reader's language. */
	words: Record<string, string>;
};

/** Opens the library's map on the network's counties. Resolves when the first picture stands. @throws where WebGL is missing. */
export async function openMap({ container, geometry, words }: OpenMapOptions): Promise<LibraryMap> {
	const map = new LibraryMap({
		container,
		style: mapStyle(geometry, colorsOfPage("loss")),
		bounds: boundsOf(geometry),
		fitBoundsOptions: { padding: 16 },
		attributionControl: false,
		dragRotate: false,
		pitchWithRotate: false,
		touchPitch: false,
		// Arrow keys walk over the map instead; the page's own buttons zoom.
		keyboard: false,
		// A finger or wheel that means to scroll the page is not caught by the map.
		cooperativeGestures: true,
		renderWorldCopies: false,
		maxZoom: 11,
		locale: words,
		fadeDuration: 0,
	});
	map.touchZoomRotate.disableRotation();
	map.getCanvas().tabIndex = -1;
	await new Promise<void>((resolve, reject) => {
		map.once("load", () => resolve());
		map.once("error", ({ error }) => reject(error));
	});
	return map;
}
