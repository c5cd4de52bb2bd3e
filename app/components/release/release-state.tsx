import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { Notice } from "#app/components/notice.tsx";
import { StatusBadge } from "#app/components/status-badge.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Release } from "#app/publish/release.ts";

type Told = Pick<Release, "number" | "edition" | "replacedBy" | "withdrawn" | "revisionReason">;

/** What became of a release, in a word. */
export function ReleaseState({ release }: { release: Told }) {
	const { t } = useTranslation("public");
	if (release.withdrawn) return <StatusBadge tone="stop">{t("data.states.withdrawn")}</StatusBadge>;
	if (release.replacedBy) return <StatusBadge tone="neutral">{t("data.states.replaced")}</StatusBadge>;
	return (
		<StatusBadge tone="good">{t(release.edition > 1 ? "data.states.revised" : "data.states.current")}</StatusBadge>
	);
}

/** Before any figure of a release: that it was withdrawn, replaced, or replaces another, and why. */
export function ReleaseNotice({ release }: { release: Told }) {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	const { withdrawn, replacedBy, revisionReason } = release;
	return (
		<>
			{withdrawn && (
				<Notice tone="caution" title={t("data.withdrawn.title", { date: format.dayOf(withdrawn.at) })}>
					<p>{wordsIn(withdrawn.reason, i18n.language)}</p>
					<p className="mt-2">{t("data.withdrawn.body")}</p>
				</Notice>
			)}
			{replacedBy && (
				<Notice tone="attention" title={t("data.replaced.title")}>
					<Link to={href("/data/:release", { release: `${replacedBy}` })}>
						{t("data.replaced.link", { number: replacedBy })}
					</Link>
				</Notice>
			)}
			{revisionReason && !withdrawn && (
				<Notice tone="info" title={t("data.revised.title")}>
					{wordsIn(revisionReason, i18n.language)}
				</Notice>
			)}
		</>
	);
}
