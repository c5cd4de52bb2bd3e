import { useState } from "react";
import { useTranslation } from "react-i18next";
import { href, redirect, type ShouldRevalidateFunctionArgs } from "react-router";
import type { Route } from "./+types/map";
import { EmptyState } from "#app/components/empty-state.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { CountyMap } from "#app/components/map/county-map.tsx";
import { Legend } from "#app/components/map/legend.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { formatterFor } from "#app/lib/format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { type MapFigures, mapFiguresOf, pairFiguresOf } from "#app/publish/figures.server.ts";
import { countiesAddress } from "#app/publish/geometry.server.ts";
import { choose, type MapQuery, readMapQuery } from "#app/publish/map-choice.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { findRelease, listCoveredStates, listCrops, listMeasures, listReleases } from "#app/publish/releases.server.ts";
import type { Release, ReleaseMeasure } from "#app/publish/release.ts";
import { differencesOf, orderSeasonRows, pairRows } from "#app/publish/season-pair.ts";
import { namedLike, tableRows } from "#app/publish/table-rows.ts";
import { MapForm } from "./parts/map-form.tsx";
import { MapPair, type Pair } from "./parts/map-pair.tsx";
import { MapTable } from "./parts/map-table.tsx";
import { ReleaseNotice } from "./parts/release-state.tsx";
import { useChosenArea } from "./parts/use-chosen-area.ts";

export async function loader({ request, context }: Route.LoaderArgs) {
	const query = readMapQuery(request.url);
	const releases = await listReleases();
	const release = query.release ? await findRelease(query.release) : releases[0];
	if (!release && query.release) throw refusal("release_not_found");
	if (release?.withdrawn) throw redirect(href("/data/:release", { release: `${release.number}` }));
	if (!release) return { map: null };

	const measures = await listMeasures(release.releaseId);
	const measureChoice = choose(
		query.measure,
		measures.map(({ key }) => key),
	);
	const measure = measures.find(({ key }) => key === measureChoice.key);
	if (!measure) return { map: null };
	const crops = await listCrops(release.releaseId, measure.key);
	const cropChoice = choose(query.crop, crops);
	const [figures, states] = await Promise.all([
		mapFiguresOf(release, measure, cropChoice.key ?? "all", query.kind),
		listCoveredStates(release.releaseId),
	]);
	const { compare } = formatterFor(getLanguage(context), getT(context, "common"));
	const [picture, outlines] = [pictureOf(states), countiesAddress(states)];
	if (!figures || !picture || !outlines) return { map: null };
	const pair = await pairOf(release, measure, figures.cropKey, query, compare);
	const offered = release.replacedBy ? [release, ...releases] : releases;
	const seasons = offered.map(({ number, season, title }) => ({ number, season, title }));
	return {
		map: {
			...figures,
			query,
			measures: measures.map(({ key, label }) => ({ key, label })),
			crops,
			releases: seasons,
			changed: measureChoice.changed || cropChoice.changed,
			pair,
			beside: pair && (query.beside ?? null),
			besideMissing: Boolean(query.beside) && !pair && query.beside !== release.number,
			picture,
			outlines,
			rows: pair ? [] : tableRows(figures.cells, oneMapOrder(query), compare),
		},
	};
}

/** The two columns of a pair are nothing to sort by where there is one map. */
const oneMapOrder = ({ q, sort, direction }: MapQuery) =>
	({ q, sort: sort === "value" ? "value" : "area", direction }) as const;

/** The chosen release beside the other that is asked for, the earlier season first; null where they cannot stand so. */
async function pairOf(
	release: Release,
	measure: ReleaseMeasure,
	cropKey: string,
	query: MapQuery,
	compare: (a: string, b: string) => number,
): Promise<Pair | null> {
	const other = query.beside ? await findRelease(query.beside) : undefined;
	const figures = other && (await pairFiguresOf(release, measure, other, cropKey, query.kind));
	if (!figures) return null;
	const [earlier, later] = figures.toSorted(bySeason) as [MapFigures, MapFigures];
	const rows = namedLike(pairRows(earlier.cells, later.cells, measure.decimals), query.q);
	const order = { key: query.sort, direction: query.direction };
	return { earlier, later, rows: orderSeasonRows(rows, order, compare), differences: differencesOf(earlier, later) };
}

const bySeason = ({ release: a }: MapFigures, { release: b }: MapFigures) => a.season - b.season || a.number - b.number;

function withoutArea(url: URL): string {
	const search = new URLSearchParams(url.search);
	search.delete("area");
	return `${url.pathname}?${search}`;
}

/** Choosing an area changes the address and nothing else; what is shown of it is on the page already. */
export function shouldRevalidate({ currentUrl, nextUrl, defaultShouldRevalidate }: ShouldRevalidateFunctionArgs) {
	const areaOnly = currentUrl.search !== nextUrl.search && withoutArea(currentUrl) === withoutArea(nextUrl);
	return areaOnly ? false : defaultShouldRevalidate;
}

export default function MapPage({ loaderData: { map } }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	if (!map) {
		return (
			<Page title={t("map.title")} lead={t("map.lead")}>
				<EmptyState title={t("empty.title")}>{t("empty.body")}</EmptyState>
			</Page>
		);
	}
	return <Map key={`${map.release.number} ${map.kind} ${map.beside}`} map={map} />;
}

type MapData = NonNullable<Route.ComponentProps["loaderData"]["map"]>;

function Map({ map }: { map: MapData }) {
	const { t, i18n } = useTranslation("public");
	const { release, measure, cropKey, pair } = map;
	const title = t("map.shown", {
		measure: wordsIn(measure.label, i18n.language),
		crop: t(`common:crop.${cropKey}`),
		season: pair
			? t("map.two.seasons", { earlier: pair.earlier.release.season, later: pair.later.release.season })
			: release.season,
	});
	const [chosen, chooseArea] = useChosenArea();
	return (
		<Page title={title} lead={wordsIn(measure.description, i18n.language)}>
			<ReleaseNotice release={release} />
			<MapForm map={map} chosen={chosen} onChoose={chooseArea} />
			{map.changed && <Notice tone="info">{t("map.changed", { shown: title })}</Notice>}
			{map.besideMissing && <Notice tone="info">{t("map.two.missing", { shown: title })}</Notice>}
			{pair ? (
				<MapPair pair={pair} shown={map} title={title} chosen={chosen} onChoose={chooseArea} />
			) : (
				<OneMap map={map} title={title} chosen={chosen} onChoose={chooseArea} />
			)}
		</Page>
	);
}

type OneMapProps = {
	map: MapData;
	title: string;
	chosen: string | null;
	onChoose: (areaKey: string | null) => void;
};

function OneMap({ map, title, chosen, onChoose }: OneMapProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const areaName = useAreaName();
	const [pointed, setPointed] = useState<string | null>(null);
	const { release, measure, cropKey, kind, cells, areaOfCounty } = map;
	const byArea = Object.fromEntries(cells.map((cell) => [cell.areaKey, cell]));
	const drawn = { cells, classes: map.classes, areaOfCounty, hue: measure.hue, picture: map.picture };
	const figuresAddress = `${href("/map/figures/:release/:measure/:crop", { release: `${release.number}`, measure: measure.key, crop: cropKey })}?kind=${kind}`;
	const withoutCell = Object.values(areaOfCounty).filter((areaKey) => !areaKey || !byArea[areaKey]).length;
	return (
		<>
			<div className="grid grid-cols-[minmax(0,1fr)] gap-6 lg:grid-cols-[minmax(0,1fr)_17rem]">
				<CountyMap
					{...drawn}
					label={t("map.alternative", { title })}
					countiesAddress={map.outlines}
					figuresAddress={figuresAddress}
					measure={measure}
					chosen={chosen && byArea[chosen] ? chosen : null}
					pointed={pointed}
					nameOf={(areaKey) => (byArea[areaKey] ? areaName(byArea[areaKey]) : t("area.unnamed"))}
					onChoose={onChoose}
				/>
				<div>
					<Legend
						title={title}
						cells={cells}
						classes={map.classes}
						notAsked={kind === "county" ? withoutCell : 0}
						hue={measure.hue}
						measure={measure}
					/>
					<p className="mt-4 text-sm text-quiet">{t(`map.counted.${kind}`)}</p>
					<p className="mt-4 text-sm text-quiet">{t("map.withheldWhy")}</p>
					<p className="mt-4 text-sm text-quiet">
						{t("map.source", { number: release.number, date: format.dayOf(release.publishedAt) })}
					</p>
				</div>
			</div>
			<MapTable map={map} title={title} onPoint={setPointed} onChoose={onChoose} />
		</>
	);
}
