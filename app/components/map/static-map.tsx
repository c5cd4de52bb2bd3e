import "./map.css";
import { memo, type ReactNode, useId } from "react";
import { useTranslation } from "react-i18next";
import { classes as classNames } from "#app/components/classes.ts";
import { fillOf } from "./fills.ts";
import type { DrawnCell, DrawnClass, DrawnHue } from "./map-data.ts";
import { pointsOfPath } from "#app/lib/geography/short-path.ts";
import { outerEdge, pathOfEdges } from "./outer-edge.ts";
import { MapPatterns } from "./patterns.tsx";

export type DrawnPicture = {
	width: number;
	height: number;
	counties: { fips: string; outline: string }[];
	stateLines: string;
	stateNames: { stateFips: string; x: number; y: number }[];
};
/** What a map draws: the sheet, its figures, and how they are coloured. */
export type DrawnMap = {
	picture: DrawnPicture;
	cells: DrawnCell[];
	classes: DrawnClass[];
	areaOfCounty: Record<string, string | null>;
	hue: DrawnHue;
	/** Each area's figure in a sentence, which whoever points at it is told without scripts. */
	sentences?: Record<string, string>;
};
export type StaticMapProps = DrawnMap & {
	/** What the map shows, in a sentence; the figures themselves stand in the table beside it. */
	label: string;
	selected?: string | null;
	/** Fills a frame of a given height instead of taking its own. */
	framed?: boolean;
};

/** The map drawn on the server: for a page without scripts or WebGL, for print, and until the live map is there. */
export const StaticMap = memo(function StaticMap({ label, selected, framed, ...drawn }: StaticMapProps) {
	const id = useId();
	const { picture, areaOfCounty } = drawn;
	const chosen = picture.counties.filter(({ fips }) => selected && areaOfCounty[fips] === selected);
	const border = pathOfEdges(outerEdge(chosen.flatMap(({ outline }) => pointsOfPath(outline))));
	return (
		<svg
			viewBox={`0 0 ${picture.width} ${picture.height}`}
			role="img"
			aria-labelledby={`${id}-title`}
			className={classNames(
				"mx-auto block w-full",
				framed ? "h-full print:h-auto" : "h-auto max-h-[80vh] print:max-h-[120mm]",
			)}
		>
			<title id={`${id}-title`}>{label}</title>
			<MapDrawing id={id} {...drawn}>
				{border && <path d={border} className="map-selected-halo" />}
				{border && <path d={border} className="map-selected" />}
			</MapDrawing>
		</svg>
	);
});

/** The map itself, inside of whatever drawing holds it; what lies over its lines comes as children. */
export function MapDrawing({
	id,
	picture,
	cells,
	classes,
	areaOfCounty,
	hue,
	sentences,
	children,
}: DrawnMap & { id: string; children?: ReactNode }) {
	const { t } = useTranslation();
	const byArea = new Map(cells.map((cell) => [cell.areaKey, cell]));
	return (
		<>
			<MapPatterns id={id} />
			{picture.counties.map(({ fips, outline }) => {
				const areaKey = areaOfCounty[fips] ?? "";
				const said = sentences?.[areaKey];
				return (
					<path key={fips} d={outline} {...lookOfShape(byArea.get(areaKey), hue, classes.length, id)}>
						{said && <title>{said}</title>}
					</path>
				);
			})}
			<Hatching
				id={`${id}-hatched`}
				picture={picture}
				outlines={picture.counties.flatMap(({ fips, outline }) =>
					byArea.get(areaOfCounty[fips] ?? "")?.look === "withheld" ? [outline] : [],
				)}
			/>
			<path d={picture.stateLines} className="map-states" />
			{children}
			<g aria-hidden="true" pointerEvents="none">
				{picture.stateNames.map(({ stateFips, x, y }) => (
					<text key={stateFips} x={x} y={y} className="map-state-name">
						{t(`state.${stateFips}`)}
					</text>
				))}
			</g>
		</>
	);
}

/** As far apart as the lines of the pattern that legends have. */
const hatchStep = 7 * Math.SQRT2;

/**
 * One set of lines for all withheld counties, cut to their outlines. A pattern would be printed as a picture for each county,
 * which makes a file of some megabytes.
 */
function Hatching({ id, picture, outlines }: { id: string; picture: DrawnPicture; outlines: string[] }) {
	if (outlines.length === 0) return null;
	const { width, height } = picture;
	const lines = Array.from({ length: Math.ceil((width + height) / hatchStep) }, (_, index) => {
		const from = Math.round(index * hatchStep * 10) / 10;
		return `M${from} 0L${Math.round((from - height) * 10) / 10} ${height}`;
	});
	return (
		<>
			<clipPath id={id}>
				<path d={outlines.join("")} />
			</clipPath>
			<path d={lines.join("")} clipPath={`url(#${id})`} className="map-hatch" pointerEvents="none" />
		</>
	);
}

/** Nothing but the class name and the pattern: a withheld county is told from a blank one by its hatching only. */
function lookOfShape(cell: DrawnCell | undefined, hue: DrawnHue, classCount: number, id: string) {
	if (cell?.look === "rough") return { className: "map-county", fill: `url(#${id}-rough)` };
	if (cell?.look === "withheld") return { className: "map-county map-blank map-withheld" };
	if (cell?.look === "no_growers") return { className: "map-county map-blank" };
	if (cell?.look !== "number" || cell.classIndex === null) return { className: "map-county map-unasked" };
	return { className: `map-county ${fillOf(hue, cell.classIndex, classCount)}` };
}
