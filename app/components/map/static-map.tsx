import "./map.css";
import { memo, useId } from "react";
import { useTranslation } from "react-i18next";
import { classes as classNames } from "#app/components/classes.ts";
import { fillOf } from "./fills.ts";
import type { DrawnCell, DrawnClass, Hue } from "./map-data.ts";
import { outerEdge, pathOfEdges, ringsOfPath } from "./outer-edge.ts";
import { MapPatterns } from "./patterns.tsx";

export type DrawnPicture = {
	width: number;
	height: number;
	counties: { fips: string; outline: string }[];
	stateLines: string;
	stateNames: { stateFips: string; x: number; y: number }[];
};
export type StaticMapProps = {
	picture: DrawnPicture;
	cells: DrawnCell[];
	classes: DrawnClass[];
	areaOfCounty: Record<string, string | null>;
	hue: Hue;
	/** What the map shows, in a sentence; the figures themselves stand in the table beside it. */
	label: string;
	selected?: string | null;
	/** Fills a frame of a given height instead of taking its own. */
	framed?: boolean;
};

/** The map drawn on the server: for a page without scripts or WebGL, for print, and until the live map is there. */
export const StaticMap = memo(function StaticMap({
	picture,
	cells,
	classes,
	areaOfCounty,
	hue,
	label,
	selected,
	framed,
}: StaticMapProps) {
	const { t } = useTranslation();
	const id = useId();
	const byArea = new Map(cells.map((cell) => [cell.areaKey, cell]));
	const chosen = picture.counties.filter(({ fips }) => selected && areaOfCounty[fips] === selected);
	const border = pathOfEdges(outerEdge(chosen.flatMap(({ outline }) => ringsOfPath(outline))));
	return (
		<svg
			viewBox={`0 0 ${picture.width} ${picture.height}`}
			role="img"
			aria-labelledby={`${id}-title`}
			className={classNames("mx-auto block w-full", framed ? "h-full print:h-auto" : "h-auto max-h-[80vh]")}
		>
			<title id={`${id}-title`}>{label}</title>
			<MapPatterns id={id} />
			{picture.counties.map(({ fips, outline }) => {
				const cell = byArea.get(areaOfCounty[fips] ?? "");
				return <path key={fips} d={outline} {...lookOfShape(cell, hue, classes.length, id)} />;
			})}
			<path d={picture.stateLines} className="map-states" />
			{border && <path d={border} className="map-selected-halo" />}
			{border && <path d={border} className="map-selected" />}
			<g aria-hidden="true">
				{picture.stateNames.map(({ stateFips, x, y }) => (
					<text key={stateFips} x={x} y={y} className="map-state-name">
						{t(`state.${stateFips}`)}
					</text>
				))}
			</g>
		</svg>
	);
});

/** Nothing but the class name and the pattern: a withheld county is told from a blank one by its hatching only. */
function lookOfShape(cell: DrawnCell | undefined, hue: Hue, classCount: number, id: string) {
	if (cell?.look === "withheld" || cell?.look === "rough")
		return { className: "map-county", fill: `url(#${id}-${cell.look})` };
	if (cell?.look === "no_growers") return { className: "map-county map-blank" };
	if (cell?.look !== "number" || cell.classIndex === null) return { className: "map-county map-unasked" };
	return { className: `map-county ${fillOf(hue, cell.classIndex, classCount)}` };
}
