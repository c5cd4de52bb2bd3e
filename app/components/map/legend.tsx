import { type ReactNode, useId } from "react";
import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { fillOf } from "./fills.ts";
import type { DrawnCell, DrawnClass, Hue } from "./map-data.ts";
import { MapPatterns } from "./patterns.tsx";

export type LegendProps = {
	title: string;
	cells: DrawnCell[];
	classes: DrawnClass[];
	/** Areas on the map for which the survey asked nobody. */
	notAsked: number;
	hue: Hue;
	measure: FigureShape;
	/** A second map in the same classes, counted in a column of its own; both columns then have a name. */
	beside?: { cells: DrawnCell[]; notAsked: number; names: [string, string] };
};

/** What each colour and sign stands for, with how many areas have it. */
export function Legend({ title, cells, classes, notAsked, hue, measure, beside }: LegendProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const id = useId();
	const maps = [{ cells, notAsked }, ...(beside ? [beside] : [])];
	const count = (wanted: (cell: DrawnCell) => boolean) => maps.map((map) => map.cells.filter(wanted).length);
	const withLook = (look: DrawnCell["look"]) => count((cell) => cell.look === look);
	const rangeOf = ({ from, to }: DrawnClass) =>
		from === to ? format.figure(from, measure) : format.range(from, to, measure);
	const blank = withLook("no_growers");
	const [rough, withheld] = [withLook("rough"), withLook("withheld")];
	const unasked = withLook("no_figure").map((number, index) => number + (maps[index]?.notAsked ?? 0));
	return (
		<div className="text-sm">
			<p className="font-bold">{title}</p>
			{beside && (
				<p className="mt-2 flex justify-end text-quiet">
					<span className="sr-only">{t("map.two.counts")}</span>
					{beside.names.map((name) => (
						<span key={name} className={countColumn}>
							{name}
						</span>
					))}
				</p>
			)}
			<ul className="mt-2 grid list-none gap-1.5">
				{classes.map((drawn, index) => (
					<Entry key={drawn.from} words={rangeOf(drawn)} counts={count((cell) => cell.classIndex === index)}>
						<rect {...square} className={`map-county ${fillOf(hue, index, classes.length)}`} />
					</Entry>
				))}
				{any(rough) && (
					<Entry words={t("common:steadiness.rough")} counts={rough}>
						<MapPatterns id={id} />
						<rect {...square} className="map-county" fill={`url(#${id}-rough)`} />
					</Entry>
				)}
				{any(withheld) && (
					<Entry words={t("map.legend.withheld")} counts={withheld}>
						<MapPatterns id={`${id}-2`} />
						<rect {...square} className="map-county" fill={`url(#${id}-2-withheld)`} />
					</Entry>
				)}
				{any(blank) && (
					<Entry words={t("map.legend.no_growers")} counts={blank}>
						<rect {...square} className="map-county map-blank" />
					</Entry>
				)}
				{any(unasked) && (
					<Entry words={t("common:figure.not_asked")} counts={unasked}>
						<rect {...square} className="map-county map-unasked" />
					</Entry>
				)}
			</ul>
		</div>
	);
}

const any = (counts: number[]) => counts.some((count) => count > 0);
const countColumn = "w-14 pl-3 text-right";
const square = { x: 1, y: 1, width: 26, height: 16 };

function Entry({ words, counts, children }: { words: string; counts: number[]; children: ReactNode }) {
	const format = useFormat();
	return (
		<li className="flex items-center gap-2.5">
			<svg viewBox="0 0 28 18" aria-hidden="true" className="h-[18px] w-7 shrink-0">
				{children}
			</svg>
			<span>{words}</span>
			<span className="ml-auto flex text-quiet tabular-nums">
				{counts.map((count, index) => (
					<span
						// The columns stand where they stand.
						// oxlint-disable-next-line react/no-array-index-key
						key={index}
						className={counts.length > 1 ? countColumn : "pl-3"}
					>
						{format.number(count)}
					</span>
				))}
			</span>
		</li>
	);
}
