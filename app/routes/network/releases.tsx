import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/releases";
import { requireCoordinator } from "#app/auth/guard.server.ts";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { listDrafts } from "#app/release/drafts.server.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const network = requireCoordinator(context);
	const drafts = await network.transaction((trx) => listDrafts(trx, network.viewer));
	return {
		drafts: drafts.map(({ releaseDraftId, status, season, title, draftedBy, draftedAt }) => ({
			releaseDraftId,
			status,
			season,
			title,
			draftedBy: draftedBy.displayName,
			draftedAt,
		})),
	};
}

const tones = {
	queued: "neutral",
	failed: "stop",
	audit_failed: "stop",
	audited: "attention",
	scheduled: "attention",
	approved: "good",
	rejected: "neutral",
	superseded: "neutral",
	cancelled: "neutral",
} as const;

export default function Releases({ loaderData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	return (
		<Page title={t("review.listTitle")} lead={t("review.listLead")}>
			<DataTable
				caption={t("review.listTitle")}
				captionHidden
				rows={loaderData.drafts}
				rowKey={(draft) => draft.releaseDraftId}
				columns={[
					{
						key: "survey",
						header: t("review.survey"),
						cell: (draft) => (
							<Link to={href("/network/releases/:draftId", { draftId: draft.releaseDraftId })}>
								{t("review.surveyName", { title: wordsIn(draft.title, i18n.language), season: draft.season })}
							</Link>
						),
					},
					{
						key: "status",
						header: t("review.status"),
						cell: (draft) => <StatusBadge tone={tones[draft.status]}>{t(`review.state.${draft.status}`)}</StatusBadge>,
					},
					{ key: "by", header: t("review.draftedBy"), cell: (draft) => draft.draftedBy },
					{ key: "at", header: t("review.draftedAt"), cell: (draft) => format.moment(draft.draftedAt) },
				]}
				empty={<EmptyState title={t("review.emptyTitle")}>{t("review.emptyBody")}</EmptyState>}
			/>
		</Page>
	);
}
