import { useState } from "react";
import { useTranslation } from "react-i18next";
import { href, redirect, useSearchParams, type ShouldRevalidateFunctionArgs } from "react-router";
import type { Route } from "./+types/map";
import { EmptyState } from "#app/components/empty-state.tsx";
import { areaNamer, useAreaName } from "#app/components/map/area-name.ts";
import { CountyMap } from "#app/components/map/county-map.tsx";
import { Legend } from "#app/components/map/legend.tsx";
import { useMapFinding } from "#app/components/map/use-map-finding.ts";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { formatterFor } from "#app/lib/format.ts";
import { pageOf } from "#app/lib/page-of.ts";
import { refusal } from "#app/lib/refusal.ts";
import { countiesAddress } from "#app/publish/geometry.server.ts";
import { inState, type MapQuery, readMapQuery } from "#app/publish/map-choice.ts";
import { findMapView, isView, listWholeFigures, type MapView } from "#app/publish/map-view.server.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { differencesOf, orderSeasonRows, pairRows } from "#app/publish/season-pair.ts";
import { namedLike, tableRows } from "#app/publish/table-rows.ts";
import { countedOn } from "./parts/map-counts.ts";
import { AreaFinder } from "./parts/area-finder.tsx";
import { MapFiles } from "./parts/map-files.tsx";
import { MapForm } from "./parts/map-form.tsx";
import { MapPair, type Pair } from "./parts/map-pair.tsx";
import { MapTable } from "./parts/map-table.tsx";
import { ReleaseNotice } from "#app/components/release/release-state.tsx";
import { searchArea } from "./parts/search-area.ts";
import { useChosenArea } from "./parts/use-chosen-area.ts";
import { useViewTitle } from "./parts/use-view-title.ts";

/** Of the table: a network's counties are on one page, and of all the country's a page is still soon made. */
const pageSize = 500;

export async function loader({ request, context }: Route.LoaderArgs) {
	const query = readMapQuery(request.url);
	const view = await findMapView(query);
	if (view === "not_found") throw refusal("release_not_found");
	if (!isView(view)) {
		if (typeof view === "object") throw redirect(href("/data/:release", { release: `${view.withdrawn}` }));
		return { map: null };
	}
	const { figures, measures, states, state } = view;
	const areas = (view.pair ?? [figures]).flatMap(({ cells }) => cells);
	const search = searchArea(request.url, query.find, areas, areaNamer(getT(context, "common")));
	const [picture, outlines] = [pictureOf(states, state), countiesAddress(states)];
	if (!picture || !outlines) return { map: null };
	const { compare } = formatterFor(getLanguage(context), getT(context, "common"));
	const pair = pairTable(view, query, compare);
	const rows = pair ? [] : tableRows(inState(figures.cells, state), oneMapOrder(query), compare);
	return {
		map: {
			...figures,
			query,
			search,
			measures: measures.map(({ key, label }) => ({ key, label })),
			crops: view.crops,
			releases: view.releases.map(({ number, season, title }) => ({ number, season, title })),
			changed: view.changed,
			pair,
			beside: pair && (query.beside ?? null),
			besideMissing: view.besideMissing,
			states,
			state,
			wholes: await listWholeFigures(view),
			picture,
			outlines,
			table: pageOf(rows, query.page, pageSize),
		},
	};
}

/** The two columns of a pair are nothing to sort by where there is one map. */
const oneMapOrder = ({ q, sort, direction }: MapQuery) =>
	({ q, sort: sort === "value" ? "value" : "area", direction }) as const;

/** Both seasons with the rows of their one table and with what was not alike in them. */
function pairTable(view: MapView, query: MapQuery, compare: (a: string, b: string) => number): Pair | null {
	if (!view.pair) return null;
	const [earlier, later] = view.pair;
	const all = pairRows(earlier.cells, later.cells, later.measure.decimals);
	const rows = namedLike(inState(all, view.state), query.q);
	const order = { key: query.sort, direction: query.direction };
	const table = pageOf(orderSeasonRows(rows, order, compare), query.page, pageSize);
	return { earlier, later, table, differences: differencesOf(earlier, later) };
}

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
	const [search] = useSearchParams();
	const { release, measure, cropKey, pair } = map;
	const title = useViewTitle()({
		measure,
		cropKey,
		state: map.state,
		shown: pair ? [pair.earlier, pair.later] : [map],
	});
	const finding = useMapFinding()(map);
	const [chosen, chooseArea] = useChosenArea();
	return (
		<Page title={title} lead={wordsIn(measure.description, i18n.language)}>
			<ReleaseNotice release={release} />
			{finding && <p className="mb-6 max-w-prose text-xl font-bold">{finding}</p>}
			<MapForm map={map} chosen={chosen} />
			{map.changed && <Notice tone="info">{t("map.changed", { shown: title })}</Notice>}
			{map.besideMissing && <Notice tone="info">{t("map.two.missing", { shown: title })}</Notice>}
			<AreaFinder kind={map.kind} areas={map.cells} chosen={chosen} search={map.search} onChoose={chooseArea} />
			{pair ? (
				<MapPair pair={pair} shown={map} title={title} chosen={chosen} onChoose={chooseArea} />
			) : (
				<OneMap map={map} title={title} chosen={chosen} onChoose={chooseArea} />
			)}
			<MapFiles search={search} language={i18n.language} />
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
	const { release, measure, cropKey, kind, cells, areaOfCounty, hue, way, state } = map;
	const byArea = Object.fromEntries(cells.map((cell) => [cell.areaKey, cell]));
	const drawn = { cells, classes: map.classes, areaOfCounty, hue, picture: map.picture };
	const figuresAddress = `${href("/map/figures/:release/:measure/:crop", { release: `${release.number}`, measure: measure.key, crop: cropKey })}?kind=${kind}&classes=${way}`;
	return (
		<>
			<div className="grid grid-cols-[minmax(0,1fr)] gap-6 lg:grid-cols-[minmax(0,1fr)_17rem] print:grid-cols-[minmax(0,1fr)_15rem]">
				<CountyMap
					{...drawn}
					label={t("map.alternative", { title })}
					countiesAddress={map.outlines}
					figuresAddress={figuresAddress}
					measure={measure}
					focus={state}
					chosen={chosen && byArea[chosen] ? chosen : null}
					pointed={pointed}
					nameOf={(areaKey) => (byArea[areaKey] ? areaName(byArea[areaKey]) : t("area.unnamed"))}
					onChoose={onChoose}
				/>
				<div>
					<Legend
						title={title}
						{...countedOn(map, map.picture, state)}
						classes={map.classes}
						hue={hue}
						measure={measure}
					/>
					<p className="mt-4 text-sm text-quiet">{t(`map.classes.${way}`)}</p>
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
