import { useId } from "react";
import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import { fillOf } from "./fills.ts";
import { type Counted, type LegendEntry, useLegendEntries } from "./legend-entries.ts";
import type { DrawnClass, DrawnHue } from "./map-data.ts";
import { MapPatterns } from "./patterns.tsx";

export type LegendProps = Counted & {
	title: string;
	classes: DrawnClass[];
	hue: DrawnHue;
	measure: FigureShape;
	/** A second map in the same classes, counted in a column of its own; both columns then have a name. */
	beside?: Counted & { names: [string, string] };
};

/** What each colour and sign stands for, with how many areas have it. */
export function Legend({ title, cells, classes, unasked, ofDistricts, hue, measure, beside }: LegendProps) {
	const { t } = useTranslation("public");
	const id = useId();
	const entries = useLegendEntries([{ cells, unasked, ofDistricts }, ...(beside ? [beside] : [])], classes, measure);
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
				{entries.map((entry) => (
					<Entry key={entry.sign} entry={entry} {...{ hue, classCount: classes.length, id: `${id}-${entry.sign}` }} />
				))}
			</ul>
		</div>
	);
}

const countColumn = "w-14 pl-3 text-right";

type SignProps = { sign: LegendEntry["sign"]; hue: DrawnHue; classCount: number; id: string };

/** The square of one legend line, 26 by 16, in the look that its areas have on the map. */
export function LegendSign({ sign, hue, classCount, id }: SignProps) {
	const square = { x: 1, y: 1, width: 26, height: 16 };
	if (typeof sign === "number") return <rect {...square} className={`map-county ${fillOf(hue, sign, classCount)}`} />;
	if (sign === "no_growers") return <rect {...square} className="map-county map-blank" />;
	if (sign === "no_figure" || sign === "no_district") return <rect {...square} className="map-county map-unasked" />;
	return (
		<>
			<MapPatterns id={id} />
			<rect {...square} className="map-county" fill={`url(#${id}-${sign})`} />
		</>
	);
}

function Entry({ entry: { words, counts, sign }, ...look }: { entry: LegendEntry } & Omit<SignProps, "sign">) {
	const format = useFormat();
	return (
		<li className="flex items-center gap-2.5">
			<svg viewBox="0 0 28 18" aria-hidden="true" className="h-[18px] w-7 shrink-0">
				<LegendSign sign={sign} {...look} />
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
