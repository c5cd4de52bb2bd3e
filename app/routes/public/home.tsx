import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/home";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { useToldText } from "#app/components/report/told-words.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { mapFiguresOf } from "#app/publish/figures.server.ts";
import { cropRows, findingOf, leadingMeasure } from "#app/publish/finding.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { findLatestRelease, listCoveredStates, listCropCells, listMeasures } from "#app/publish/releases.server.ts";
import { listToldReports } from "#app/publish/resolved-report.server.ts";
import { FindingPage } from "./parts/home-finding.tsx";

export async function loader() {
	const [release, reports] = await Promise.all([findLatestRelease(), listToldReports(1)]);
	const measure = release && leadingMeasure(await listMeasures(release.releaseId));
	if (!release || !measure) return { latest: null, reports };

	const cells = await listCropCells(release.releaseId, measure.key, "network");
	const finding = findingOf(measure, cells);
	const [figures, states] = await Promise.all([
		mapFiguresOf(release, measure, finding?.cell.cropKey ?? "all", "county"),
		listCoveredStates(release.releaseId),
	]);
	return {
		latest: { release, measure, finding, rows: cropRows(measure, cells), figures, picture: pictureOf(states) },
		reports,
	};
}

export default function Home({ loaderData: { latest, reports } }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	if (!latest) {
		return (
			<Page title={t("home.title")} lead={t("home.lead")}>
				<EmptyState title={t("empty.title")}>{t("empty.body")}</EmptyState>
				<About />
			</Page>
		);
	}
	return (
		<FindingPage latest={latest}>
			<About />
			{reports[0] && <LatestReport report={reports[0]} />}
		</FindingPage>
	);
}

function About() {
	const { t } = useTranslation("public");
	return (
		<Section title={t("home.about.title")}>
			<div className="grid max-w-prose gap-3">
				<p>{t("home.about.what")}</p>
				<p>{t("home.about.how")}</p>
				<p>
					<Link to={href("/methods")}>{t("home.about.methods")}</Link>
				</p>
				<p>
					<Link to={href("/data")}>{t("home.about.data")}</Link>
				</p>
			</div>
		</Section>
	);
}

type LatestReportProps = { report: Route.ComponentProps["loaderData"]["reports"][number] };

function LatestReport({ report }: LatestReportProps) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const toldText = useToldText();
	return (
		<Section title={t("home.report")}>
			<p className="text-lg font-bold">
				<Link to={href("/reports/:slug", { slug: report.slug })}>{toldText(report.title)}</Link>
			</p>
			<p className="max-w-prose">{toldText(report.summary)}</p>
			<p className="mt-1 text-sm text-quiet">{format.dayOf(report.publishedAt)}</p>
		</Section>
	);
}
