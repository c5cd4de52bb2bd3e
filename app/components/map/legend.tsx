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
};

/** What each colour and sign stands for, with how many areas have it. */
export function Legend({ title, cells, classes, notAsked, hue, measure }: LegendProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const id = useId();
	const withLook = (look: DrawnCell["look"]) => cells.filter((cell) => cell.look === look).length;
	const rangeOf = ({ from, to }: DrawnClass) =>
		from === to ? format.figure(from, measure) : format.range(from, to, measure);
	const blank = withLook("no_growers");
	const unasked = notAsked + withLook("no_figure");
	return (
		<div className="text-sm">
			<p className="font-bold">{title}</p>
			<ul className="mt-2 grid list-none gap-1.5">
				{classes.map((drawn, index) => (
					<Entry key={drawn.from} words={rangeOf(drawn)} count={drawn.count}>
						<rect {...square} className={`map-county ${fillOf(hue, index, classes.length)}`} />
					</Entry>
				))}
				{withLook("rough") > 0 && (
					<Entry words={t("common:steadiness.rough")} count={withLook("rough")}>
						<MapPatterns id={id} />
						<rect {...square} className="map-county" fill={`url(#${id}-rough)`} />
					</Entry>
				)}
				{withLook("withheld") > 0 && (
					<Entry words={t("map.legend.withheld")} count={withLook("withheld")}>
						<MapPatterns id={`${id}-2`} />
						<rect {...square} className="map-county" fill={`url(#${id}-2-withheld)`} />
					</Entry>
				)}
				{blank > 0 && (
					<Entry words={t("map.legend.no_growers")} count={blank}>
						<rect {...square} className="map-county map-blank" />
					</Entry>
				)}
				{unasked > 0 && (
					<Entry words={t("common:figure.not_asked")} count={unasked}>
						<rect {...square} className="map-county map-unasked" />
					</Entry>
				)}
			</ul>
		</div>
	);
}

const square = { x: 1, y: 1, width: 26, height: 16 };

function Entry({ words, count, children }: { words: string; count: number; children: ReactNode }) {
	const format = useFormat();
	return (
		<li className="flex items-center gap-2.5">
			<svg viewBox="0 0 28 18" aria-hidden="true" className="h-[18px] w-7 shrink-0">
				{children}
			</svg>
			<span>{words}</span>
			<span className="ml-auto pl-3 text-quiet tabular-nums">{format.number(count)}</span>
		</li>
	);
}
