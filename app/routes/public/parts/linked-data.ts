import type { Language } from "#app/i18n/language.ts";
import type { Release } from "#app/publish/release.ts";
import type { PublishedReport } from "#app/publish/reports.server.ts";

type Described = {
	report: Pick<PublishedReport, "authorName" | "publishedAt" | "version" | "correction">;
	release: Pick<Release, "number" | "season">;
	language: Language;
	address: string;
	title: string;
	summary: string;
	network: string;
	firstPublishedAt: string;
};

/** A report in the words of schema.org, for search and for citing. */
export function linkedData(described: Described) {
	const { report, release, language, address, title, summary, network, firstPublishedAt } = described;
	const base = address.replace(/\/reports\/.*$/, "");
	return {
		"@context": "https://schema.org",
		"@type": "Report",
		"@id": address,
		url: address,
		headline: title,
		abstract: summary,
		inLanguage: language,
		version: String(report.version),
		datePublished: firstPublishedAt,
		dateModified: report.publishedAt,
		isAccessibleForFree: true,
		author: { "@type": "Person", name: report.authorName },
		publisher: { "@type": "Organization", name: network },
		temporalCoverage: String(release.season),
		isBasedOn: { "@type": "Dataset", url: `${base}/data/${release.number}` },
		...(report.correction && { correction: report.correction[language] }),
	};
}
