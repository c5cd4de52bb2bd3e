import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/data";
import { type Column, DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Release } from "#app/publish/release.ts";
import { listEveryRelease } from "#app/publish/releases.server.ts";
import { ReleaseState } from "./parts/release-state.tsx";

export async function loader() {
	return { releases: await listEveryRelease() };
}

export default function Data({ loaderData: { releases } }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	const columns = useReleaseColumns();
	return (
		<Page title={t("data.title")} lead={t("data.lead")}>
			<DataTable
				caption={t("data.caption")}
				columns={columns}
				rows={releases}
				rowKey={(release) => release.releaseId}
				empty={<EmptyState title={t("empty.title")}>{t("empty.body")}</EmptyState>}
			/>
			<Section title={t("data.files.title")}>
				<p className="max-w-prose">{t("data.files.body")}</p>
				<p className="mt-3">
					<Link to={href("/dataroom")}>{t("data.files.link")}</Link>
				</p>
			</Section>
		</Page>
	);
}

function useReleaseColumns(): Column<Release>[] {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	return [
		{
			key: "title",
			header: t("data.release"),
			cell: ({ number, season, title }) => (
				<Link to={href("/data/:release", { release: `${number}` })} className="print-plain">
					{t("data.named", { number, season, title: wordsIn(title, i18n.language) })}
				</Link>
			),
		},
		{
			key: "state",
			header: t("data.state"),
			cell: (release) => <ReleaseState release={release} />,
		},
		{ key: "season", header: t("map.form.season"), numeric: true, cell: ({ season }) => season },
		{ key: "published", header: t("data.published"), cell: ({ publishedAt }) => format.dayOf(publishedAt) },
		{
			key: "answered",
			header: t("data.answered"),
			numeric: true,
			cell: ({ method }) => (method.all ? format.number(method.all.answered) : ""),
		},
	];
}
