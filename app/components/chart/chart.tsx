import { useTranslation } from "react-i18next";
import { useAreaName } from "#app/components/map/area-name.ts";
import { rangeOf } from "#app/lib/likely-range.ts";
import { wordsIn } from "#app/i18n/language.ts";
import type { ResolvedChart } from "#app/publish/resolved-chart.server.ts";
import { CauseBars } from "./cause-bars.tsx";
import { paleFill, partFill } from "./chart-fills.ts";
import { numbered, type Shown } from "./chart-look.ts";
import { ChartTable } from "./chart-table.tsx";
import { DayStrips } from "./day-strips.tsx";
import { SeasonsUnshown } from "./seasons-unshown.tsx";
import { SeasonLine } from "./season-line.tsx";
import { useFinding } from "./use-finding.ts";
import { AreaDots, CropBars } from "./value-rows.tsx";

type ChartProps = {
	drawn: ResolvedChart;
	season: number;
	/** The page has a table of the same figures already. */
	alone?: boolean;
	/** What the scale must hold besides, so that charts beside each other can be compared. */
	beside?: number[];
};

/** A chart under a title that says what it shows, how to read it, and the same figures as a table. */
export function Chart({ drawn, season, alone, beside }: ChartProps) {
	const { t } = useTranslation("report");
	const finding = useFinding()(drawn);
	const subject = useSubject(drawn, season);
	const alternative = t(`chart.alternative.${drawn.chart}`, { finding, subject });
	return (
		<div className="my-8">
			{/* Its title is printed on the sheet of the drawing; only the table may go on to the next. */}
			<figure>
				<figcaption className="mb-3">
					<p className="max-w-prose text-lg font-bold">{finding}</p>
					<p className="text-sm text-quiet">{subject}</p>
				</figcaption>
				<Drawing drawn={drawn} alternative={alternative} beside={beside} />
				{drawn.chart === "causes" && <Key drawn={drawn} />}
				<p className="mb-3 mt-2 max-w-prose text-sm text-quiet">
					{t(`chart.read.${drawn.chart}`)} {isCareful(drawn) && t("chart.care")} {isBare(drawn) && t("chart.bare")}
				</p>
				{drawn.chart === "seasons" && <SeasonsUnshown rows={drawn.rows} />}
			</figure>
			{!alone && <ChartTable drawn={drawn} caption={subject} />}
		</div>
	);
}

function Drawing({ drawn, ...said }: { drawn: ResolvedChart; alternative: string; beside?: number[] }) {
	switch (drawn.chart) {
		case "crops":
			return <CropBars drawn={drawn} {...said} />;
		case "areas":
			return <AreaDots drawn={drawn} {...said} />;
		case "seasons":
			return <SeasonLine drawn={drawn} alternative={said.alternative} />;
		case "windows":
			return <DayStrips drawn={drawn} alternative={said.alternative} />;
		case "causes":
			return <CauseBars drawn={drawn} alternative={said.alternative} />;
	}
}

/** What exactly is drawn: measure, crop or area, and season. */
function useSubject(drawn: ResolvedChart, season: number): string {
	const { t, i18n } = useTranslation("report");
	const areaName = useAreaName();
	const labels = drawn.chart === "windows" ? drawn.measures : [drawn.measure];
	const measure = labels.map(({ label }) => wordsIn(label, i18n.language)).join(", ");
	switch (drawn.chart) {
		case "areas":
			return t("chart.subject.areas", {
				measure,
				crop: t(`common:crop.${drawn.cropKey}`),
				areas: t(`common:areaKind.plural.${drawn.kind}`),
				season,
			});
		case "causes":
			if (drawn.rows.some(({ cropKey }) => cropKey !== "all"))
				return t("chart.subject.crops", { measure, area: areaName(drawn.area), season });
			return t("chart.subject.whole", { measure, crop: t("common:crop.all"), area: areaName(drawn.area), season });
		case "seasons":
			return t("chart.subject.seasons", {
				measure,
				crop: t(`common:crop.${drawn.cropKey}`),
				area: areaName(drawn.area),
			});
		default:
			return t("chart.subject.crops", { measure, area: areaName(drawn.area), season });
	}
}

/** Which part of a bar is which cause. */
function Key({ drawn }: { drawn: Extract<ResolvedChart, { chart: "causes" }> }) {
	const { t, i18n } = useTranslation("report");
	const entries = [
		...drawn.parts.map(({ label }, index) => ({
			fill: partFill(drawn.measure.hue, index),
			words: wordsIn(label, i18n.language),
		})),
		{ fill: paleFill[drawn.measure.hue], words: t("chart.rest") },
	];
	return (
		<ul className="mt-2 flex list-none flex-wrap gap-x-6 gap-y-1 text-sm">
			{entries.map(({ fill, words }) => (
				<li key={words} className="flex items-center gap-2">
					<svg viewBox="0 0 18 12" aria-hidden="true" className="chart h-3 w-[18px] shrink-0">
						<rect x="0.5" y="0.5" width="17" height="11" className={`chart-edge ${fill}`} />
					</svg>
					{words}
				</li>
			))}
		</ul>
	);
}

/** Whether a figure in it has no likely range, as where all answers agree. */
function isBare(drawn: ResolvedChart): boolean {
	return numbered(drawnCells(drawn)).some((cell) => !rangeOf(cell));
}

function drawnCells(drawn: ResolvedChart): Shown[] {
	switch (drawn.chart) {
		case "crops":
		case "areas":
			return drawn.rows;
		case "seasons":
			return drawn.rows.map(({ cell }) => cell);
		case "causes":
			return drawn.rows.map(({ whole }) => whole);
		// Strips of days draw no range.
		case "windows":
			return [];
	}
}

function isCareful(drawn: ResolvedChart): boolean {
	switch (drawn.chart) {
		case "crops":
		case "areas":
			return drawn.rows.some(({ steadiness }) => steadiness === "care");
		case "seasons":
			return drawn.rows.some(({ cell }) => cell.steadiness === "care");
		default:
			return false;
	}
}
