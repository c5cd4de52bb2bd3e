import { useState } from "react";
import { useTranslation } from "react-i18next";
import { href } from "react-router";
import { useAreaName } from "#app/components/map/area-name.ts";
import { CountyMap } from "#app/components/map/county-map.tsx";
import { Legend } from "#app/components/map/legend.tsx";
import type { DrawnPicture } from "#app/components/map/static-map.tsx";
import { linkViews, type ViewLink } from "#app/components/map/view-link.ts";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { daysInYear } from "#app/lib/day-of-year.ts";
import type { PageOf } from "#app/lib/page-of.ts";
import type { MapFigures } from "#app/publish/figures.server.ts";
import type { SeasonDifference, SeasonRow } from "#app/publish/season-pair.ts";
import type { MapQuery } from "#app/publish/map-choice.ts";
import { countedOn } from "./map-counts.ts";
import { PairTable } from "./map-pair-table.tsx";

export type Pair = {
	earlier: MapFigures;
	later: MapFigures;
	table: PageOf<SeasonRow>;
	differences: SeasonDifference[];
};
type Shown = { picture: DrawnPicture; outlines: string; query: MapQuery; state: string | null };
type Choosing = { chosen: string | null; onChoose: (areaKey: string | null) => void };

/** "2024 (release 3)": two editions of one season keep apart. */
export function useSeasonName() {
	const { t } = useTranslation("public");
	return ({ release: { season, number } }: Pick<MapFigures, "release">) => t("map.two.season", { season, number });
}

/** Two seasons side by side: one legend, one table, and maps that move together. */
export function MapPair({
	pair,
	shown,
	title,
	chosen,
	onChoose,
}: { pair: Pair; shown: Shown; title: string } & Choosing) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const seasonName = useSeasonName();
	const [pointed, setPointed] = useState<string | null>(null);
	const [link] = useState(linkViews);
	const { earlier, later } = pair;
	return (
		<>
			<DifferenceNotice pair={pair} />
			<div className="print:grid print:grid-cols-[minmax(0,1fr)_16rem] print:gap-6">
				<div className="grid grid-cols-[minmax(0,1fr)] gap-6 lg:grid-cols-2 print:grid-cols-2 print:gap-3">
					<SeasonMap
						figures={earlier}
						other={later}
						{...{ shown, chosen, onChoose, pointed, link }}
						onPoint={setPointed}
					/>
					<SeasonMap
						figures={later}
						other={earlier}
						{...{ shown, chosen, onChoose, pointed, link }}
						onPoint={setPointed}
					/>
				</div>
				<div className="mt-6 grid gap-x-10 gap-y-4 sm:grid-cols-2 print:contents">
					<Legend
						title={t("map.two.legend", { title })}
						{...countedOn(earlier, shown.picture, shown.state)}
						classes={earlier.classes}
						hue={later.hue}
						measure={later.measure}
						beside={{
							...countedOn(later, shown.picture, shown.state),
							names: [columnName(earlier, later), columnName(later, earlier)],
						}}
					/>
					<div className="grid gap-4 self-start text-sm text-quiet print:col-span-2 print:gap-2">
						<p>{t(`map.classes.${later.way}`)}</p>
						<p>{t(`map.counted.${later.kind}`)}</p>
						<p>{t("map.withheldWhy")}</p>
						{[earlier, later].map((of) => (
							<p key={of.release.number}>
								{seasonName(of)}:{" "}
								{t("map.source", { number: of.release.number, date: format.dayOf(of.release.publishedAt) })}
							</p>
						))}
					</div>
				</div>
			</div>
			<PairTable pair={pair} query={shown.query} title={title} onPoint={setPointed} onChoose={onChoose} />
		</>
	);
}

/** "2024", or "2024 (3)" where both are of one season. */
export const columnName = (of: MapFigures, other: MapFigures) =>
	of.release.season === other.release.season ? `${of.release.season} (${of.release.number})` : `${of.release.season}`;

type SeasonMapProps = Choosing & {
	figures: MapFigures;
	other: MapFigures;
	shown: Shown;
	pointed: string | null;
	onPoint: (areaKey: string | null) => void;
	link: ViewLink;
};

function SeasonMap({ figures, other, shown, chosen, onChoose, pointed, onPoint, link }: SeasonMapProps) {
	const { t, i18n } = useTranslation("public");
	const areaName = useAreaName();
	const season = useSeasonName()(figures);
	const { release, measure, cropKey, kind, cells, classes, areaOfCounty, hue, way } = figures;
	const title = t("map.shown", {
		measure: wordsIn(measure.label, i18n.language),
		crop: t(`common:crop.${cropKey}`),
		season,
	});
	const address = href("/map/figures/:release/:measure/:crop", {
		release: `${release.number}`,
		measure: measure.key,
		crop: cropKey,
	});
	const byArea = new Map([...other.cells, ...cells].map((cell) => [cell.areaKey, cell]));
	const nameOf = (areaKey: string) => {
		const cell = byArea.get(areaKey);
		return t("map.two.area", { name: cell ? areaName(cell) : t("area.unnamed"), season: release.season });
	};
	return (
		<section aria-label={title}>
			<h2 className="mb-2 text-lg font-bold">{season}</h2>
			<CountyMap
				{...{ cells, classes, areaOfCounty, hue, nameOf, measure, pointed, onPoint, onChoose, link }}
				focus={shown.state}
				picture={shown.picture}
				label={t("map.alternative", { title })}
				countiesAddress={shown.outlines}
				figuresAddress={`${address}?kind=${kind}&beside=${other.release.number}&classes=${way}`}
				chosen={chosen && byArea.has(chosen) ? chosen : null}
			/>
		</section>
	);
}

function DifferenceNotice({ pair: { differences, earlier, later } }: { pair: Pair }) {
	const { t } = useTranslation("public");
	const leap = daysInYear(earlier.release.season) !== daysInYear(later.release.season);
	const dates = later.measure.unit === "day" && leap;
	if (differences.length === 0 && !dates) return null;
	return (
		<Notice tone="attention" title={t("map.two.differ.title")}>
			<ul className="list-disc pl-5">
				{differences.map((key) => (
					<li key={key}>{t(`map.two.differ.${key}`)}</li>
				))}
				{dates && <li>{t("map.two.differ.dates", { season: later.release.season })}</li>}
			</ul>
		</Notice>
	);
}
