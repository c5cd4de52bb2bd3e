import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/report";
import { Page } from "#app/components/page.tsx";
import { ReportBlocks } from "#app/components/report/report-blocks.tsx";
import { ToldText, useToldText } from "#app/components/report/told-words.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { findPublishedReport } from "#app/publish/reports.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { ReleaseNotice } from "./parts/release-state.tsx";

export async function loader({ params }: Route.LoaderArgs) {
	const report = await findPublishedReport(params.slug);
	const release = report && (await findReleaseById(report.releaseId));
	if (!report || !release) throw refusal("report_not_found");
	return {
		authorName: report.authorName,
		version: report.version,
		publishedAt: report.publishedAt,
		release,
		told: await resolveReport(report.content, release),
	};
}

export default function Report({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const toldText = useToldText();
	const { told, release, version } = loaderData;
	const releaseNumber = release.number;
	if (release.withdrawn) return <WithdrawnReport release={release} />;
	return (
		<Page title={toldText(told.title)} lead={<ToldText told={told.summary} />}>
			<article className="max-w-4xl">
				<p className="border-y border-rule py-3 text-sm text-quiet">
					{t("report.byline", { date: format.dayOf(loaderData.publishedAt), author: loaderData.authorName })}{" "}
					{t("report.version", { version, number: releaseNumber })}
				</p>
				<ReleaseNotice release={release} />
				<div className="mt-6">
					<ReportBlocks blocks={told.blocks} season={told.season} picture={told.picture} />
				</div>
				<footer className="mt-10 border-t border-line pt-4 text-sm">
					<p className="max-w-prose">{t("report.bound", { number: releaseNumber })}</p>
					<p className="mt-3 flex flex-wrap gap-x-6 gap-y-2">
						<Link to={href("/data/:release", { release: `${releaseNumber}` })}>
							{t("report.toRelease", { number: releaseNumber })}
						</Link>
						<Link to={href("/methods")}>{t("report.toMethods")}</Link>
						<Link to={`${href("/map")}?release=${releaseNumber}`}>{t("home.openMap")}</Link>
					</p>
				</footer>
			</article>
		</Page>
	);
}

/** Its own words speak of figures that are gone, so only its release is named. */
function WithdrawnReport({ release }: Pick<Route.ComponentProps["loaderData"], "release">) {
	const { t, i18n } = useTranslation("public");
	const { number, season, title } = release;
	return (
		<Page title={t("report.withdrawn", { title: wordsIn(title, i18n.language), season })}>
			<ReleaseNotice release={release} />
			<p>
				<Link to={href("/data/:release", { release: `${number}` })}>{t("report.toRelease", { number })}</Link>
			</p>
		</Page>
	);
}
