import type { Route } from "./+types/report-feed";
import { isLanguage, wordsIn } from "#app/i18n/language.ts";
import { getInstance, getLanguage } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { textWords } from "#app/lib/figure-words.ts";
import { formatterFor } from "#app/lib/format.ts";
import { atomFeed } from "#app/publish/atom.ts";
import { listReportFiles } from "#app/publish/reports.server.ts";
import { listToldReports } from "#app/publish/resolved-report.server.ts";

const mostEntries = 30;

/** Published reports for feed readers, in the language that `?language=` names, else the reader's. */
export async function loader({ context, request }: Route.LoaderArgs) {
	const asked = new URL(request.url).searchParams.get("language");
	const language = isLanguage(asked) ? asked : getLanguage(context);
	const t = getInstance(context).getFixedT(language);
	const format = formatterFor(language, t);
	const base = env().BASE_URL;
	const reports = await listToldReports(mostEntries);
	const entries = await Promise.all(
		reports.map(async (report) => {
			const address = `${base}/reports/${report.slug}`;
			const files = await listReportFiles(report.reportId);
			const summary = textWords(report.summary[language], t, format);
			return {
				address,
				title: textWords(report.title[language], t, format),
				summary: report.correction
					? t("report:feed.corrected", { what: wordsIn(report.correction, language), summary })
					: summary,
				author: report.authorName,
				published: report.firstPublishedAt,
				updated: report.publishedAt,
				pdfAddress: files.includes(language) ? `${address}/${report.version}-${language}.pdf` : null,
			};
		}),
	);
	const body = atomFeed({
		language,
		title: t("report:feed.title"),
		address: `${base}/reports`,
		selfAddress: `${base}/reports.atom?language=${language}`,
		entries,
	});
	return new Response(body, {
		headers: {
			"content-type": "application/atom+xml; charset=utf-8",
			"content-language": language,
			"cache-control": "public, max-age=300",
			vary: "accept-language, cookie",
		},
	});
}
