import { useTranslation } from "react-i18next";
import { data, href, Link } from "react-router";
import type { Route } from "./+types/data";
import { ButtonLink } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { SearchBar } from "#app/components/search-bar.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { getT } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { stateOf } from "#app/publish/api/item-rows.ts";
import type { Release } from "#app/publish/release.ts";
import { listEveryRelease, listRespondentsBands, listStatesByRelease } from "#app/publish/releases.server.ts";
import { ReleaseState } from "#app/components/release/release-state.tsx";
import { CatalogueQuery, fitsCatalogue, problemOfSearch, releaseStates } from "./parts/release/catalogue.ts";

export async function loader({ context, request }: Route.LoaderArgs) {
	const query = CatalogueQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const t = getT(context, "common");
	const [every, bands, states] = await Promise.all([listEveryRelease(), listRespondentsBands(), listStatesByRelease()]);
	const rows = every.map((release) => {
		const stateFips = states[release.releaseId] ?? [];
		const places = stateFips.map((state) => t(`common:state.${state}`));
		const { number, season, title } = release;
		return {
			release,
			places,
			band: bands[release.releaseId] ?? null,
			entry: {
				number,
				season,
				stateFips,
				what: stateOf(release),
				text: [number, season, title.en, title.es, ...places].join(" "),
			},
		};
	});
	const problem = problemOfSearch(query);
	const shown = {
		query,
		problem,
		any: every.length > 0,
		seasons: [...new Set(every.map(({ season }) => season))].toSorted((a, b) => b - a),
		states: [...new Set(Object.values(states).flat())].toSorted(),
		rows: rows
			.filter(({ entry }) => fitsCatalogue(entry, query))
			.map(({ release, places, band }) => ({ release, places, band })),
	};
	return data(shown, { status: problem ? 400 : 200 });
}

type Row = Route.ComponentProps["loaderData"]["rows"][number];

export default function Data({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation(["public", "dataroom"]);
	const columns = useReleaseColumns();
	const { any, rows } = loaderData;
	return (
		<Page title={t("public:data.title")} lead={t("public:data.lead")}>
			{any && <Filters {...loaderData} />}
			<DataTable
				caption={t("public:data.caption")}
				columns={columns}
				rows={rows}
				rowKey={({ release }) => release.releaseId}
				empty={
					any ? (
						<EmptyState title={t("dataroom:catalogue.none")}>
							<p className="mb-3">{t("dataroom:catalogue.noneBody")}</p>
							<ButtonLink to={href("/data")} kind="secondary">
								{t("dataroom:catalogue.clear")}
							</ButtonLink>
						</EmptyState>
					) : (
						<EmptyState title={t("public:empty.title")}>{t("public:empty.body")}</EmptyState>
					)
				}
			/>
			<Section title={t("public:data.files.title")}>
				<p className="max-w-prose">{t("public:data.files.body")}</p>
				<p className="mt-3 flex flex-wrap gap-x-6">
					<Link to={href("/api")}>{t("public:data.api")}</Link>
					<Link to={href("/dataroom")}>{t("public:data.files.link")}</Link>
				</p>
			</Section>
		</Page>
	);
}

function Filters({ query, problem, seasons, states }: Route.ComponentProps["loaderData"]) {
	const { t } = useTranslation(["dataroom", "public"]);
	return (
		<SearchBar label={t("dataroom:catalogue.search")} defaultValue={query.q} problem={problem}>
			<ChoiceField
				kind="select"
				name="season"
				legend={t("dataroom:catalogue.season")}
				options={[
					{ value: "", label: t("dataroom:catalogue.anySeason") },
					...seasons.map((season) => ({ value: `${season}`, label: `${season}` })),
				]}
				defaultValue={query.season === null ? "" : `${query.season}`}
			/>
			<ChoiceField
				kind="select"
				name="state"
				legend={t("dataroom:catalogue.state")}
				options={[
					{ value: "", label: t("dataroom:catalogue.anyState") },
					...states.map((state) => ({ value: state, label: t(`common:state.${state}`) })),
				]}
				defaultValue={query.state ?? ""}
			/>
			<ChoiceField
				kind="select"
				name="what"
				legend={t("dataroom:catalogue.what")}
				options={[
					{ value: "", label: t("dataroom:catalogue.anyWhat") },
					...releaseStates.map((what) => ({ value: what, label: t(`public:data.states.${what}`) })),
				]}
				defaultValue={query.what ?? ""}
			/>
		</SearchBar>
	);
}

function useReleaseColumns(): Column<Row>[] {
	const { t } = useTranslation("public");
	const format = useFormat();
	return [
		{ key: "title", header: t("data.release"), cell: ({ release }) => <ReleaseName release={release} /> },
		{ key: "state", header: t("data.state"), cell: ({ release }) => <ReleaseState release={release} /> },
		{ key: "season", header: t("map.form.season"), numeric: true, cell: ({ release }) => release.season },
		{ key: "where", header: t("data.where"), cell: ({ places }) => format.list(places) },
		{ key: "published", header: t("data.published"), cell: ({ release }) => format.dayOf(release.publishedAt) },
		{ key: "answered", header: t("data.band"), cell: ({ band }) => band ?? "" },
	];
}

/** Its name, and below it what changed about it, so that nobody takes up an old one unawares. */
function ReleaseName({ release }: { release: Release }) {
	const { t, i18n } = useTranslation(["public", "dataroom"]);
	const { number, season, title, revisionReason, withdrawn } = release;
	const why = withdrawn
		? t("dataroom:catalogue.whyWithdrawn", { reason: wordsIn(withdrawn.reason, i18n.language) })
		: revisionReason && t("dataroom:catalogue.whyRevised", { reason: wordsIn(revisionReason, i18n.language) });
	return (
		<>
			<Link to={href("/data/:release", { release: `${number}` })} className="print-plain">
				{t("public:data.named", { number, season, title: wordsIn(title, i18n.language) })}
			</Link>
			{why && <span className="block max-w-md text-quiet">{why}</span>}
		</>
	);
}
