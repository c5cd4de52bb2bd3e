import type { StyleSpecification } from "maplibre-gl";
import type { MapColors } from "./map-colors.client.ts";
import { type FiguresAnswer, type GeometryAnswer, paletteStep } from "./map-data.ts";

const source = (data: unknown) => ({ type: "geojson" as const, data: data as never });
const none = ["in", ["id"], ["literal", []]] as never;

/** The map's own style: paper, counties, state lines and names. Nothing is fetched: no tiles, no glyphs, no sprites. */
export function mapStyle(geometry: GeometryAnswer, colors: MapColors): StyleSpecification {
	return {
		version: 8,
		sources: {
			counties: source(geometry.counties),
			states: source(geometry.stateLines),
			names: source(geometry.stateNames),
			marked: source({ type: "FeatureCollection", features: [] }),
		},
		layers: [
			{ id: "paper", type: "background", paint: { "background-color": colors.paper } },
			{
				id: "counties",
				type: "fill",
				source: "counties",
				paint: { "fill-color": colors.paper, "fill-antialias": false },
			},
			// The two patterns are drawn in the page's colours and set with them.
			{ id: "withheld", type: "fill", source: "counties", filter: none },
			{ id: "rough", type: "fill", source: "counties", filter: none },
			{
				id: "county-lines",
				type: "line",
				source: "counties",
				paint: { "line-color": colors.line, "line-opacity": 0.4, "line-width": 0.7 },
			},
			{ id: "states", type: "line", source: "states", paint: { "line-color": colors.line, "line-width": 1.8 } },
			{
				id: "marked-halo",
				type: "line",
				source: "marked",
				layout: { "line-cap": "round" },
				paint: { "line-color": colors.mark, "line-width": 7 },
			},
			{
				id: "marked",
				type: "line",
				source: "marked",
				layout: { "line-cap": "round" },
				paint: { "line-color": colors.ink, "line-width": 3 },
			},
			{
				id: "state-names",
				type: "symbol",
				source: "names",
				layout: {
					"text-field": ["get", "name"],
					"text-font": ["Noto Sans"],
					"text-size": 14,
					"text-letter-spacing": 0.06,
				},
				paint: { "text-color": colors.ink, "text-halo-color": colors.paper, "text-halo-width": 1.6 },
			},
		],
	};
}

export type Painted = { fill: unknown; withheld: number[]; rough: number[] };

/**
 * Colours by county number. A withheld county has the paper's colour, as every other that was asked and has no number; all the
 * rest are grey, whether the figures name them or not.
 */
export function paintedBy({ cells, classes, areaOfCounty }: FiguresAnswer, colors: MapColors): Painted {
	const byArea = new Map(cells.map((cell) => [cell.areaKey, cell]));
	const groups = new Map<string, number[]>();
	for (const [fips, areaKey] of Object.entries(areaOfCounty)) {
		const cell = byArea.get(areaKey ?? "");
		if (!cell || cell.look === "no_figure") continue;
		const group = cell.look === "number" && cell.classIndex !== null ? `${cell.classIndex}` : cell.look;
		groups.set(group, [...(groups.get(group) ?? []), Number(fips)]);
	}
	const branches = classes.flatMap((_, index) => {
		const ids = groups.get(`${index}`);
		return ids ? [ids, colors.palette[paletteStep(index, classes.length)] ?? colors.paper] : [];
	});
	const blank = (["withheld", "rough", "no_growers"] as const).flatMap((look) => groups.get(look) ?? []);
	if (blank.length > 0) branches.push(blank, colors.paper);
	return {
		fill: branches.length > 0 ? ["match", ["id"], ...branches, colors.unasked] : colors.unasked,
		withheld: groups.get("withheld") ?? [],
		rough: groups.get("rough") ?? [],
	};
}
