import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { FollowButton } from "#app/components/release/follow-button.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { Release } from "#app/publish/release.ts";
import type { Following } from "./following.server.ts";

/** To be told by mail when these figures are revised or withdrawn; or what is missing for that. */
export function FollowRelease({ release, following }: { release: Release; following: Following }) {
	const { t, i18n } = useTranslation("dataroom");
	const { number, seriesId, season, title } = release;
	const named = t("home.releaseName", { number, title: wordsIn(title, i18n.language), season });
	return (
		<div className="grid max-w-prose gap-3">
			<p>{t(following === "yes" ? "follow.followed" : "follow.what")}</p>
			{following === "signed_out" && (
				<p className="no-print">
					<Link to={`/sign-in?next=${encodeURIComponent(href("/data/:release", { release: `${number}` }))}`}>
						{t("follow.signIn")}
					</Link>
				</p>
			)}
			{following === "no_researcher" && (
				<p className="no-print">
					<Link to={href("/dataroom/access")}>{t("follow.askAccess")}</Link>
				</p>
			)}
			{following === "no_address" && <p>{t("follow.noAddress")}</p>}
			{(following === "yes" || following === "no") && (
				<FollowButton seriesId={seriesId} named={named} following={following === "yes"} release={number} />
			)}
		</div>
	);
}
