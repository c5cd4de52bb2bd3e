import { useId } from "react";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { LegendSign } from "./legend.tsx";
import { type Counted, type LegendEntry, useLegendEntries } from "./legend-entries.ts";
import type { DrawnClass, DrawnHue } from "./map-data.ts";
import { colorOf, pictureStyle } from "./picture-style.ts";
import { type DrawnMap, MapDrawing } from "./static-map.tsx";
import { textLines } from "./text-lines.ts";

export type MapPictureProps = {
	/** What the picture says, as its title; what exactly it draws. */
	finding: string;
	subject: string;
	/** One season, or two with the name of each. */
	maps: (DrawnMap & { name: string | null })[];
	legend: { counted: Counted[]; names: string[]; classes: DrawnClass[]; hue: DrawnHue; measure: FigureShape };
	/** How classes were made, what is withheld and why, where the figures come from and how to cite them. */
	notes: string[];
};

const pad = 40;
const gap = 32;
const sizes = { finding: 27, subject: 18, name: 18, legend: 16, note: 14 };
const lead = 1.4;

/** A view of the map as one drawing that stands by itself: title, maps, legend with counts, and source. */
export function MapPicture({ finding, subject, maps, legend, notes }: MapPictureProps) {
	const mapWidth = maps.length > 1 ? 620 : 820;
	const width = 2 * pad + maps.length * mapWidth + (maps.length - 1) * gap;
	const inner = width - 2 * pad;
	const head = textLines(finding, inner, sizes.finding, "bold");
	const under = textLines(subject, inner, sizes.subject, "regular");
	const foot = notes.map((note) => textLines(note, inner, sizes.note, "regular"));

	const mapsTop = pad + head.length * sizes.finding * lead + under.length * sizes.subject * lead + 18;
	const named = maps.some(({ name }) => name !== null) ? sizes.name * lead + 6 : 0;
	const heights = maps.map(({ picture }) => (mapWidth * picture.height) / picture.width);
	const legendTop = mapsTop + named + Math.max(...heights) + 24;
	const entries = useLegendEntries(legend.counted, legend.classes, legend.measure);
	const footTop = legendTop + legendHeight(entries.length, legend.names.length > 1) + 20;
	const height = Math.ceil(footTop + foot.flat().length * sizes.note * lead + foot.length * 5 + pad - 10);
	return (
		<svg xmlns="http://www.w3.org/2000/svg" width={width} height={height} viewBox={`0 0 ${width} ${height}`} role="img">
			<title>{finding}</title>
			<desc>{subject}</desc>
			<style>{pictureStyle}</style>
			<rect width={width} height={height} fill={colorOf("paper")} />
			<Lines lines={head} y={pad} size={sizes.finding} bold />
			<Lines lines={under} y={pad + head.length * sizes.finding * lead} size={sizes.subject} quiet />
			{maps.map((map, index) => (
				<PlacedMap
					key={map.name ?? ""}
					map={map}
					x={pad + index * (mapWidth + gap)}
					y={mapsTop}
					named={named}
					width={mapWidth}
				/>
			))}
			<PictureLegend legend={legend} entries={entries} y={legendTop} width={inner} />
			{foot.map((lines, index) => (
				<Lines
					key={lines.join(" ")}
					lines={lines}
					y={footTop + foot.slice(0, index).flat().length * sizes.note * lead + index * 5}
					size={sizes.note}
					quiet
				/>
			))}
		</svg>
	);
}

type LinesProps = { lines: string[]; x?: number; y: number; size: number; bold?: boolean; quiet?: boolean };

/** Lines of text from a top edge down. */
function Lines({ lines, x = pad, y, size, bold, quiet }: LinesProps) {
	return lines.map((line, index) => (
		<text
			key={line}
			x={x}
			y={Math.round(y + index * size * lead + size)}
			fontSize={size}
			fontWeight={bold ? 700 : 400}
			className={quiet ? "quiet" : undefined}
		>
			{line}
		</text>
	));
}

type PlacedMapProps = { map: MapPictureProps["maps"][number]; x: number; y: number; named: number; width: number };

function PlacedMap({ map: { name, ...drawn }, x, y, named, width }: PlacedMapProps) {
	const id = useId();
	const { picture } = drawn;
	return (
		<>
			{name !== null && <Lines lines={[name]} x={x} y={y} size={sizes.name} bold />}
			<svg
				x={x}
				y={Math.round(y + named)}
				width={width}
				height={Math.round((width * picture.height) / picture.width)}
				viewBox={`0 0 ${picture.width} ${picture.height}`}
			>
				<MapDrawing id={id} {...drawn} />
			</svg>
		</>
	);
}

const rowHeight = 26;
const legendColumns = 2;
const legendHeight = (entries: number, named: boolean) =>
	(Math.ceil(entries / legendColumns) + (named ? 1 : 0)) * rowHeight;

type PictureLegendProps = { legend: MapPictureProps["legend"]; entries: LegendEntry[]; y: number; width: number };

/** The legend in two columns, each line with its counts to the right: one for each map. */
function PictureLegend({ legend: { names, classes, hue }, entries, y, width }: PictureLegendProps) {
	const id = useId();
	const format = useFormat();
	const rows = Math.ceil(entries.length / legendColumns);
	const columnWidth = width / legendColumns;
	const top = y + (names.length > 1 ? rowHeight : 0);
	const countsAt = (column: number) =>
		(names.length > 1 ? names : [""]).map(
			(_, index, all) => pad + (column + 1) * columnWidth - 24 - (all.length - 1 - index) * 90,
		);
	return (
		<g fontSize={sizes.legend}>
			{names.length > 1 &&
				[0, 1].flatMap((column) =>
					countsAt(column).map((x, index) => (
						<text key={x} x={x} y={y + 16} textAnchor="end" className="quiet">
							{names[index]}
						</text>
					)),
				)}
			{entries.map(({ sign, words, counts }, index) => {
				const column = Math.floor(index / rows);
				const line = top + (index % rows) * rowHeight;
				return (
					<g key={sign}>
						<svg x={pad + column * columnWidth} y={line} width="28" height="18" viewBox="0 0 28 18">
							<LegendSign sign={sign} hue={hue} classCount={classes.length} id={`${id}-${sign}`} />
						</svg>
						<text x={pad + column * columnWidth + 38} y={line + 15}>
							{words}
						</text>
						{counts.map((count, of) => (
							// oxlint-disable-next-line react/no-array-index-key -- the columns stand where they stand
							<text key={of} x={countsAt(column)[of]} y={line + 15} textAnchor="end" className="quiet">
								{format.number(count)}
							</text>
						))}
					</g>
				);
			})}
		</g>
	);
}
