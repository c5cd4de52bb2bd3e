import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/home";
import { requirePerson } from "#app/auth/guard.server.ts";
import { listFollowed } from "#app/auth/release-follows.server.ts";
import { findOwnRequest } from "#app/auth/research-access.server.ts";
import { findOwnTerm } from "#app/auth/research-term.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { isStanding } from "#app/publish/release.ts";
import { listEveryRelease } from "#app/publish/releases.server.ts";
import { AccessState } from "./parts/access-state.tsx";
import { FollowedReleases } from "./parts/followed-releases.tsx";

export async function loader({ context }: Route.LoaderArgs) {
	const { viewer } = requirePerson(context);
	const approved = context.get(visitorContext).grants.researcher;
	const [every, followed, term, request] = await Promise.all([
		listEveryRelease(),
		listFollowed(viewer),
		findOwnTerm(viewer),
		findOwnRequest(viewer),
	]);
	const releases = every.filter(isStanding);
	return {
		approved,
		term,
		request,
		// The newest edition of each, whatever became of it.
		follows: followed.flatMap((seriesId) => every.find((release) => release.seriesId === seriesId) ?? []),
		releases: releases.map(({ number, season, title, publishedAt }) => ({ number, season, title, publishedAt })),
	};
}

export default function DataRoom({ loaderData }: Route.ComponentProps) {
	const { approved, term, request, releases, follows } = loaderData;
	const { t, i18n } = useTranslation("dataroom");
	const format = useFormat();
	return (
		<Page title={t("home.title")} lead={t("home.lead")}>
			<AccessState term={term} request={request} />
			<DataTable
				caption={t("home.files")}
				rows={releases}
				rowKey={(release) => String(release.number)}
				columns={[
					{
						key: "release",
						header: t("home.release"),
						cell: (release) => (
							<Link to={href("/data/:release", { release: String(release.number) })}>
								{t("home.releaseName", {
									number: release.number,
									title: wordsIn(release.title, i18n.language),
									season: release.season,
								})}
							</Link>
						),
					},
					{ key: "published", header: t("home.published"), cell: (release) => format.dayOf(release.publishedAt) },
					{
						key: "files",
						header: t("home.take"),
						cell: (release) => (approved ? <FileLinks number={release.number} /> : t("home.afterApproval")),
					},
				]}
				empty={<EmptyState title={t("home.emptyTitle")}>{t("home.emptyBody")}</EmptyState>}
			/>
			{(approved || follows.length > 0) && (
				<Section title={t("follow.listTitle")}>
					<FollowedReleases releases={follows} />
				</Section>
			)}
		</Page>
	);
}

function FileLinks({ number }: { number: number }) {
	const { t } = useTranslation("dataroom");
	const address = (file: string) => href("/dataroom/releases/:release/:file", { release: String(number), file });
	return (
		<span className="flex flex-wrap gap-x-4">
			<a href={address("cells.csv")} download>
				{t("home.cells", { number })}
			</a>
			<a href={address(`tallygrove-release-${number}.zip`)} download>
				{t("home.archive", { number })}
			</a>
			<a href={address("codebook.csv")} download>
				{t("home.codebook", { number })}
			</a>
		</span>
	);
}
