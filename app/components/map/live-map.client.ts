import type { ExpressionSpecification, GeoJSONSource, Map as LibraryMap, MapMouseEvent } from "maplibre-gl";
import { colorsOfPage, dotImage, hatchImage, type MapColors } from "./map-colors.client.ts";
import type { FiguresAnswer, GeometryAnswer, DrawnHue } from "./map-data.ts";
import { areaMiddles, boundsOf, middlesOf, ringsOf } from "./map-places.ts";
import { paintedBy } from "./map-style.ts";
import { type Walk, walkOver } from "./map-walk.ts";
import type { MapView, Viewer } from "./view-link.ts";
import { openMap, type OpenMapOptions } from "./open-map.client.ts";
import { outerEdge } from "./outer-edge.ts";

export type LiveMapOptions = OpenMapOptions & {
	onPoint: (fips: string | null, at: { x: number; y: number } | null) => void;
	onChoose: (fips: string) => void;
};
export type LiveMap = Viewer & {
	/** Resolves when the figures are painted whole: until then a slow machine shows half a map. */
	show: (figures: FiguresAnswer, hue: DrawnHue) => Promise<void>;
	/** Outlines every county drawn from an area; null for none. */
	mark: (areaKey: string | null) => void;
	/** The area that lies next in a direction, so that arrow keys walk over the map. */
	next: Walk;
	/** Goes to one state, which is then what `reset` shows; to all of them with null. */
	frame: (state: string | null) => void;
	zoom: (steps: number) => void;
	reset: () => void;
	remove: () => void;
};

/** Draws the map into its container. Resolves when the first picture stands. @throws where WebGL is missing. */
export async function createLiveMap(options: LiveMapOptions): Promise<LiveMap> {
	const map = await openMap(options);
	listen(map, options);
	return controls(map, options.geometry);
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

function controls(map: LibraryMap, geometry: GeometryAnswer): LiveMap {
	let home = boundsOf(geometry);
	const middles = middlesOf(geometry);
	let shown: { figures: FiguresAnswer; hue: DrawnHue } | undefined;
	/** Made at the first step: most readers take none. */
	let walk: Walk | undefined;
	const paint = () => shown && repaint(map, shown.figures, colorsOfPage(shown.hue));
	const dark = matchMedia("(prefers-color-scheme: dark)");
	dark.addEventListener("change", paint);
	return {
		...viewer(map),
		show(figures, hue) {
			shown = { figures, hue };
			walk = undefined;
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
		next(from, direction) {
			walk ??= walkOver(areaMiddles(middles, shown?.figures.areaOfCounty ?? {}));
			return walk(from, direction);
		},
		frame(state) {
			home = boundsOf(geometry, state);
			map.fitBounds(home, { padding: 16, duration: 0 });
		},
		zoom: (steps) => map.easeTo({ zoom: map.getZoom() + steps, duration: 150 }),
		reset: () => map.fitBounds(home, { padding: 16, duration: 150 }),
		remove() {
			dark.removeEventListener("change", paint);
			map.remove();
		},
	};
}

/** Tells where the reader has moved the map, and goes where another was moved without telling it again. */
function viewer(map: LibraryMap): Viewer {
	let following = false;
	return {
		onMoved(tell) {
			const moved = () => {
				const { lng, lat } = map.getCenter();
				if (!following) tell({ longitude: lng, latitude: lat, zoom: map.getZoom() });
			};
			map.on("move", moved);
			return () => void map.off("move", moved);
		},
		follow({ longitude, latitude, zoom }: MapView) {
			following = true;
			map.jumpTo({ center: [longitude, latitude], zoom });
			following = false;
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
