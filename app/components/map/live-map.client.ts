import "maplibre-gl/dist/maplibre-gl.css";
import {
	type ExpressionSpecification,
	type GeoJSONSource,
	Map as LibraryMap,
	type MapMouseEvent,
	setWorkerUrl,
} from "maplibre-gl";
import workerUrl from "maplibre-gl/dist/maplibre-gl-worker.mjs?url";
import { colorsOfPage, dotImage, hatchImage, type MapColors } from "./map-colors.client.ts";
import type { FiguresAnswer, GeometryAnswer, Hue } from "./map-data.ts";
import { boundsOf, middlesOf, nextCounty, ringsOf } from "./map-places.ts";
import { mapStyle, paintedBy } from "./map-style.ts";
import { outerEdge } from "./outer-edge.ts";

setWorkerUrl(workerUrl);

export type LiveMapOptions = {
	container: HTMLElement;
	geometry: GeometryAnswer;
	/** The map library's own sentences, in the reader's language. */
	words: Record<string, string>;
	onPoint: (fips: string | null, at: { x: number; y: number } | null) => void;
	onChoose: (fips: string) => void;
};
export type LiveMap = {
	/** Resolves when the figures are painted whole: until then a slow machine shows half a map. */
	show: (figures: FiguresAnswer, hue: Hue) => Promise<void>;
	/** Outlines every county drawn from an area; null for none. */
	mark: (areaKey: string | null) => void;
	/** The county that lies next in a direction, so that arrow keys walk over the map. */
	next: (fips: string | null, direction: Direction) => string | null;
	zoom: (steps: number) => void;
	reset: () => void;
	remove: () => void;
};
export type Direction = "up" | "down" | "left" | "right";

/** Draws the map into its container. Resolves when the first picture stands. @throws where WebGL is missing. */
export async function createLiveMap(options: LiveMapOptions): Promise<LiveMap> {
	const { container, geometry, words } = options;
	const bounds = boundsOf(geometry);
	const map = new LibraryMap({
		container,
		style: mapStyle(geometry, colorsOfPage("loss")),
		bounds,
		fitBoundsOptions: { padding: 16 },
		attributionControl: false,
		dragRotate: false,
		pitchWithRotate: false,
		touchPitch: false,
		// Arrow keys walk from county to county instead; the page's own buttons zoom.
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
	listen(map, options);
	return controls(map, geometry, bounds);
}

function listen(map: LibraryMap, { onPoint, onChoose }: LiveMapOptions) {
	const fipsAt = (event: MapMouseEvent): string | null => {
		const [county] = map.queryRenderedFeatures(event.point, { layers: ["counties"] });
		return typeof county?.properties.fips === "string" ? county.properties.fips : null;
	};
	map.on("mousemove", (event) => onPoint(fipsAt(event), event.point));
	map.on("mouseout", () => onPoint(null, null));
	map.on("click", (event) => {
		const fips = fipsAt(event);
		if (fips) onChoose(fips);
	});
}

function controls(map: LibraryMap, geometry: GeometryAnswer, bounds: [number, number, number, number]): LiveMap {
	const middles = middlesOf(geometry);
	let shown: { figures: FiguresAnswer; hue: Hue } | undefined;
	const paint = () => shown && repaint(map, shown.figures, colorsOfPage(shown.hue));
	const dark = matchMedia("(prefers-color-scheme: dark)");
	dark.addEventListener("change", paint);
	return {
		show(figures, hue) {
			shown = { figures, hue };
			paint();
			return new Promise((resolve) => map.once("idle", () => resolve()));
		},
		mark(areaKey) {
			const counties = Object.entries(shown?.figures.areaOfCounty ?? {}).flatMap(([fips, area]) =>
				area !== null && area === areaKey ? [fips] : [],
			);
			const coordinates = outerEdge(ringsOf(geometry, new Set(counties))) as unknown as [number, number][][];
			const border = {
				type: "Feature" as const,
				properties: {},
				geometry: { type: "MultiLineString" as const, coordinates },
			};
			map.getSource<GeoJSONSource>("marked")?.setData(border);
		},
		next: (fips, direction) => nextCounty(middles, fips, direction),
		zoom: (steps) => map.easeTo({ zoom: map.getZoom() + steps, duration: 150 }),
		reset: () => map.fitBounds(bounds, { padding: 16, duration: 150 }),
		remove() {
			dark.removeEventListener("change", paint);
			map.remove();
		},
	};
}

function repaint(map: LibraryMap, figures: FiguresAnswer, colors: MapColors) {
	for (const [name, image] of Object.entries({ withheld: hatchImage(colors.hatch), rough: dotImage(colors.hatch) })) {
		if (map.hasImage(name)) map.updateImage(name, image);
		else map.addImage(name, image, { pixelRatio: 2 });
	}
	const painted = paintedBy(figures, colors);
	map.setPaintProperty("paper", "background-color", colors.paper);
	map.setPaintProperty("counties", "fill-color", painted.fill as ExpressionSpecification | string);
	for (const look of ["withheld", "rough"] as const) {
		map.setPaintProperty(look, "fill-pattern", look);
		map.setFilter(look, ["in", ["id"], ["literal", painted[look]]]);
	}
	map.setPaintProperty("county-lines", "line-color", colors.line);
	map.setPaintProperty("states", "line-color", colors.line);
	map.setPaintProperty("marked", "line-color", colors.ink);
	map.setPaintProperty("state-names", "text-color", colors.ink);
	map.setPaintProperty("state-names", "text-halo-color", colors.paper);
}
