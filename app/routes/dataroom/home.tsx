import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/home";
import { requirePerson } from "#app/auth/guard.server.ts";
import { listFollowed } from "#app/auth/release-follows.server.ts";
import { findOwnRequest } from "#app/auth/research-access.server.ts";
import { visitorContext } from "#app/auth/visitor.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { isStanding } from "#app/publish/release.ts";
import { listEveryRelease } from "#app/publish/releases.server.ts";
import { FollowedReleases } from "./parts/followed-releases.tsx";

export async function loader({ context }: Route.LoaderArgs) {
	const { viewer } = requirePerson(context);
	const approved = context.get(visitorContext).grants.researcher;
	const [every, followed] = await Promise.all([listEveryRelease(), listFollowed(viewer)]);
	const releases = every.filter(isStanding);
	return {
		approved,
		request: approved ? null : await findOwnRequest(viewer),
		// The newest edition of each, whatever became of it.
		follows: followed.flatMap((seriesId) => every.find((release) => release.seriesId === seriesId) ?? []),
		releases: releases.map(({ number, season, title, publishedAt }) => ({ number, season, title, publishedAt })),
	};
}

export default function DataRoom({ loaderData }: Route.ComponentProps) {
	const { approved, request, releases, follows } = loaderData;
	const { t, i18n } = useTranslation("dataroom");
	const format = useFormat();
	return (
		<Page title={t("home.title")} lead={t("home.lead")}>
			{!approved && <RequestState request={request} />}
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

function RequestState({ request }: Pick<Route.ComponentProps["loaderData"], "request">) {
	const { t } = useTranslation("dataroom");
	const format = useFormat();
	const ask = <ButtonLink to={href("/dataroom/access")}>{t("home.ask")}</ButtonLink>;
	if (!request) {
		return (
			<Notice tone="info" title={t("home.noRequestTitle")}>
				<p className="mb-3">{t("home.noRequestBody")}</p>
				{ask}
			</Notice>
		);
	}
	if (request.decision === "declined") {
		return (
			<Notice tone="attention" title={t("home.declinedTitle")}>
				<p className="mb-3">{request.decisionReason}</p>
				{ask}
			</Notice>
		);
	}
	return (
		<Notice tone="info" title={t("home.waitingTitle")}>
			{t("home.waitingBody", { day: format.dayOf(request.requestedAt) })}
		</Notice>
	);
}
