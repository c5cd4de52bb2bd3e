import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/home";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Caution } from "#app/components/caution.tsx";
import { useToldText } from "#app/components/report/told-words.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { neededCautions } from "#app/publish/cautions.ts";
import { listExpected } from "#app/publish/expected.server.ts";
import { mapFiguresOf } from "#app/publish/figures.server.ts";
import { cropRows, findingOf, leadingMeasure } from "#app/publish/finding.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { isStanding, type Release } from "#app/publish/release.ts";
import { listCoveredStates, listCropCells, listEveryRelease, listMeasures } from "#app/publish/releases.server.ts";
import { listToldReports } from "#app/publish/resolved-report.server.ts";
import { FindingPage, type Latest } from "./parts/home/finding-page.tsx";
import { NextSteps } from "./parts/home/next-steps.tsx";
import { SeasonState, WithdrawnNotice } from "./parts/home/season-state.tsx";

/** Read by people on slow lines, and nothing on it needs scripts. */
export const handle = { bare: true };

export async function loader() {
	const [every, reports, expected] = await Promise.all([listEveryRelease(), listToldReports(1), listExpected()]);
	const release = every.find(isStanding);
	// A withdrawal that no later figures have made good: said before any older figure is.
	const gone = every.find(({ number, withdrawn, replacedBy }) => {
		return withdrawn !== null && replacedBy === null && number > (release?.number ?? 0);
	});
	const told = release && (await readFinding(release));
	return {
		latest: told?.latest ?? null,
		cautions: told?.cautions ?? [],
		reports,
		expected,
		gone: gone?.withdrawn ? { ...toldOf(gone), at: gone.withdrawn.at } : null,
	};
}

const toldOf = ({ number, season, title }: Release) => ({ number, season, title });

async function readFinding(release: Release): Promise<{ latest: Latest; cautions: string[] } | undefined> {
	const measures = await listMeasures(release.releaseId);
	const measure = leadingMeasure(measures);
	if (!measure) return undefined;
	const cells = await listCropCells(release.releaseId, measure.key, "network");
	const finding = findingOf(measure, cells);
	const [figures, states] = await Promise.all([
		mapFiguresOf(release, measure, finding?.cell.cropKey ?? "all", "county"),
		listCoveredStates(release.releaseId),
	]);
	const latest = { release, measure, finding, rows: cropRows(measure, cells), figures, picture: pictureOf(states) };
	return { latest, cautions: neededCautions(measures) };
}

export default function Home({ loaderData }: Route.ComponentProps) {
	const { t } = useTranslation("public");
	const { latest, cautions, reports, expected, gone } = loaderData;
	const notice = gone && <WithdrawnNotice gone={gone} older={latest !== null} />;
	if (!latest) {
		return (
			<Page title={t("home.title")} lead={t("home.lead")}>
				{notice}
				<EmptyState title={t("empty.title")}>{t(gone ? "empty.gone" : "empty.body")}</EmptyState>
				<SeasonState expected={expected} />
				<NextSteps />
				<About />
			</Page>
		);
	}
	return (
		<FindingPage latest={latest} notice={notice}>
			{reports[0] && <LatestReport report={reports[0]} />}
			<SeasonState expected={expected} />
			<NextSteps />
			<Cautions cautions={cautions} />
			<About />
		</FindingPage>
	);
}

function Cautions({ cautions }: { cautions: string[] }) {
	const { t } = useTranslation("site");
	return (
		<Section title={t("cautions.title")}>
			<div className="grid gap-x-8 lg:grid-cols-2">
				{cautions.map((caution) => (
					<Caution key={caution} caution={caution} />
				))}
			</div>
		</Section>
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
					<Link to={href("/about")}>{t("site:about.title")}</Link>
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
