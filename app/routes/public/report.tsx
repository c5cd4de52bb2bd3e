import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/report";
import { countRead } from "#app/auth/report-reads.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Page } from "#app/components/page.tsx";
import { ReportBlocks } from "#app/components/report/report-blocks.tsx";
import { ToldText, useToldText } from "#app/components/report/told-words.tsx";
import { Section } from "#app/components/section.tsx";
import { isLanguage, wordsIn } from "#app/i18n/language.ts";
import { getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { env } from "#app/lib/env.server.ts";
import { textWords } from "#app/lib/figure-words.ts";
import { formatterFor } from "#app/lib/format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { findPublishedReport, listReportFiles, listVersions } from "#app/publish/reports.server.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { linkedData } from "./parts/linked-data.ts";
import { ReleaseNotice } from "#app/components/release/release-state.tsx";

/** Read by people on slow lines, and nothing on it needs scripts. */
export const handle = { bare: true };

const Version = z.coerce.number().int().positive().max(10_000).optional().catch(undefined);

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const version = Version.parse(new URL(request.url).searchParams.get("version") ?? undefined);
	const report = await findPublishedReport(params.slug, version);
	const release = report && (await findReleaseById(report.releaseId));
	if (!report || !release) throw refusal("report_not_found");
	// The report's own words speak of figures that are gone: none of them leaves the server.
	if (release.withdrawn) return { withdrawn: release, page: null };
	countRead(request, report.reportId);
	const [told, versions, files] = await Promise.all([
		resolveReport(report.content, release),
		listVersions(report.slug),
		listReportFiles(report.reportId),
	]);
	const language = getLanguage(context);
	const t = getT(context, "public");
	const format = formatterFor(language, t);
	const address = `${env().BASE_URL}${href("/reports/:slug", { slug: report.slug })}`;
	const described = linkedData({
		report,
		release,
		language,
		address,
		title: textWords(told.title[language], t, format),
		summary: textWords(told.summary[language], t, format),
		network: t("data.one.network"),
		firstPublishedAt: versions.at(-1)?.publishedAt ?? report.publishedAt,
	});
	const { slug, authorName, publishedAt, correction } = report;
	return {
		withdrawn: null,
		page: {
			report: { slug, authorName, version: report.version, publishedAt, correction },
			release,
			told,
			versions,
			files,
			address,
			described,
		},
	};
}

/** What machines read of the report, and where its feed is. */
export function meta({ loaderData }: Route.MetaArgs) {
	const feed = { tagName: "link", rel: "alternate", type: "application/atom+xml", href: "/reports.atom" };
	return loaderData?.page ? [feed, { "script:ld+json": loaderData.page.described }] : [feed];
}

export default function Report({ loaderData: { withdrawn, page } }: Route.ComponentProps) {
	return page ? <ReportPage {...page} /> : <WithdrawnReport release={withdrawn} />;
}

const photoAddress = (photoId: string) => href("/reports/photos/:photoId", { photoId });

type PartProps = NonNullable<Route.ComponentProps["loaderData"]["page"]>;

function ReportPage(page: PartProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const toldText = useToldText();
	const { told, release, report } = page;
	const { number } = release;
	return (
		<Page title={toldText(told.title)} lead={<ToldText told={told.summary} />} actions={<Files {...page} />}>
			<article className="report max-w-4xl">
				<p className="border-y border-rule py-3 text-sm text-quiet">
					{t("report.byline", { date: format.dayOf(report.publishedAt), author: report.authorName })}{" "}
					{t("report.version", { version: report.version, number })}
				</p>
				<ReleaseNotice release={release} />
				<Corrections {...page} />
				<div className="mt-6">
					<ReportBlocks blocks={told.blocks} season={told.season} picture={told.picture} photoAddress={photoAddress} />
				</div>
				<ReportFooter {...page} />
			</article>
		</Page>
	);
}

/** The report as files, and by mail. */
function Files({ report, files }: PartProps) {
	const { t } = useTranslation("report");
	return (
		<>
			{files.filter(isLanguage).map((language) => (
				<ButtonLink
					key={language}
					kind="secondary"
					reloadDocument
					to={href("/reports/:slug/:file", { slug: report.slug, file: `${report.version}-${language}.pdf` })}
				>
					{t("page.pdf", { language: t(`common:language.${language}`) })}
				</ButtonLink>
			))}
			<ButtonLink kind="secondary" to={href("/subscribe")}>
				{t("page.subscribe")}
			</ButtonLink>
		</>
	);
}

/** Before any figure: that this version corrects an earlier one, how and why, or that a later one corrects it. */
function Corrections({ report, versions, told }: PartProps) {
	const { t, i18n } = useTranslation("report");
	const format = useFormat();
	const latest = versions[0];
	return (
		<>
			{latest && latest.version !== report.version && (
				<Notice tone="attention" title={t("versions.old")}>
					<Link to={href("/reports/:slug", { slug: report.slug })}>{t("versions.toLatest")}</Link>
				</Notice>
			)}
			{report.correction && (
				<Notice tone="info" title={t("versions.corrects")}>
					{wordsIn(report.correction, i18n.language)}
				</Notice>
			)}
			{told.blocks.map(
				(block) =>
					block.type === "photo_gone" && (
						<Notice key={block.id} tone="info" title={t("photos.goneTitle")}>
							{t(`photos.goneWhy.${block.takenAway.because}`, { date: format.dayOf(block.takenAway.at) })}
						</Notice>
					),
			)}
		</>
	);
}

function ReportFooter({ report, release, versions, told, address }: PartProps) {
	const { t } = useTranslation("public");
	const toldText = useToldText();
	const { number } = release;
	const year = new Date(report.publishedAt).getUTCFullYear();
	return (
		<footer className="mt-10 text-sm">
			{versions.length > 1 && <VersionList slug={report.slug} versions={versions} />}
			<Section title={t("data.one.cite")}>
				<p className="max-w-prose border-l-4 border-damson bg-damson-wash px-5 py-4">
					{t("report:page.citation", {
						author: report.authorName,
						year,
						title: toldText(told.title),
						version: report.version,
						network: t("data.one.network"),
						address,
					})}
				</p>
			</Section>
			<p className="mt-4 max-w-prose">{t("report.bound", { number })}</p>
			<p className="mt-3 flex flex-wrap gap-x-6 gap-y-2">
				<Link className="print-plain" to={href("/data/:release", { release: `${number}` })}>
					{t("report.toRelease", { number })}
				</Link>
				<Link className="print-plain" to={href("/methods")}>
					{t("report.toMethods")}
				</Link>
				<Link className="print-plain" to={`${href("/map")}?release=${number}`}>
					{t("home.openMap")}
				</Link>
			</p>
		</footer>
	);
}

/** What each version changed, when and why. */
function VersionList({ slug, versions }: { slug: string; versions: PartProps["versions"] }) {
	const { t, i18n } = useTranslation("report");
	const format = useFormat();
	return (
		<Section title={t("versions.title")}>
			<ul className="list-none">
				{versions.map(({ version, publishedAt, correction }) => (
					<li key={version} className="border-t border-rule py-3">
						<Link className="print-plain" to={`${href("/reports/:slug", { slug })}?version=${version}`}>
							{t("versions.one", { version: format.number(version), moment: format.moment(publishedAt) })}
						</Link>
						<p className="max-w-prose">{correction ? wordsIn(correction, i18n.language) : t("versions.first")}</p>
					</li>
				))}
			</ul>
		</Section>
	);
}

/** Its own words speak of figures that are gone, so only its release is named. */
function WithdrawnReport({ release }: Pick<PartProps, "release">) {
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
