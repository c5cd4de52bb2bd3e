import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Notice } from "#app/components/notice.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Words } from "#app/lib/words.ts";
import type { DraftStatus } from "#app/release/drafts.server.ts";

type UnderWay = { releaseDraftId: string; status: DraftStatus; season: number; title: Words; otherRules: boolean };

/** What a change of the settings does to drafts that are there already: nothing, until they are drafted anew. */
export function DraftsUnderWay({ drafts }: { drafts: UnderWay[] }) {
	const { t, i18n } = useTranslation("network");
	const format = useFormat();
	if (drafts.length === 0) return <Notice tone="info">{t("settings.noDrafts")}</Notice>;
	const count = { count: drafts.length, value: format.number(drafts.length) };
	return (
		<Notice tone="info" title={t("settings.drafts", count)}>
			<p>{t("settings.draftsKeep")}</p>
			<ul className="mt-2 list-disc space-y-1 pl-5">
				{drafts.map(({ releaseDraftId, status, season, title, otherRules }) => (
					<li key={releaseDraftId}>
						<Link to={href("/network/releases/:draftId", { draftId: releaseDraftId })}>
							{t("release:review.surveyName", { title: wordsIn(title, i18n.language), season })}
						</Link>{" "}
						<span className="text-quiet">
							{t(`release:review.state.${status}`)}
							{otherRules && ` · ${t("settings.otherRules")}`}
						</span>
					</li>
				))}
			</ul>
		</Notice>
	);
}
