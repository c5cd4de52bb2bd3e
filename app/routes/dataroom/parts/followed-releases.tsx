import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { ButtonLink } from "#app/components/button.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { FollowButton } from "#app/components/release/follow-button.tsx";
import { ReleaseState } from "#app/components/release/release-state.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { Release } from "#app/publish/release.ts";

/** What a researcher follows, as its newest edition, with the way out of each. */
export function FollowedReleases({ releases }: { releases: Release[] }) {
	const { t, i18n } = useTranslation("dataroom");
	const named = ({ number, season, title }: Release) =>
		t("home.releaseName", { number, title: wordsIn(title, i18n.language), season });
	return (
		<DataTable
			caption={t("follow.listTitle")}
			captionHidden
			rows={releases}
			rowKey={(release) => release.seriesId}
			columns={[
				{
					key: "release",
					header: t("follow.release"),
					cell: (release) => (
						<Link to={href("/data/:release", { release: String(release.number) })}>{named(release)}</Link>
					),
				},
				{ key: "state", header: t("follow.stateOf"), cell: (release) => <ReleaseState release={release} /> },
				{
					key: "change",
					header: t("follow.change"),
					cell: (release) => <FollowButton seriesId={release.seriesId} named={named(release)} following />,
				},
			]}
			empty={
				<EmptyState
					title={t("follow.none")}
					action={
						<ButtonLink to={href("/data")} kind="secondary">
							{t("follow.toData")}
						</ButtonLink>
					}
				>
					{t("follow.noneBody")}
				</EmptyState>
			}
		/>
	);
}
