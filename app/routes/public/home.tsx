import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/home";
import { ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Figure } from "#app/components/figure.tsx";
import { Legend } from "#app/components/map/legend.tsx";
import { StaticMap } from "#app/components/map/static-map.tsx";
import { Page } from "#app/components/page.tsx";
import { CropTable } from "#app/components/report/crop-table.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { mapFiguresOf } from "#app/publish/figures.server.ts";
import { cropRows, findingOf, leadingMeasure } from "#app/publish/finding.ts";
import { pictureOf } from "#app/publish/picture.server.ts";
import { findLatestRelease, listCoveredStates, listCropCells, listMeasures } from "#app/publish/releases.server.ts";
import { listPublishedReports } from "#app/publish/reports.server.ts";

export async function loader() {
	const [release, reports] = await Promise.all([findLatestRelease(), listPublishedReports()]);
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

type Latest = NonNullable<Route.ComponentProps["loaderData"]["latest"]>;

function FindingPage({ latest, children }: { latest: Latest; children: React.ReactNode }) {
	const { t, i18n } = useTranslation("public");
	const { release, measure, finding, rows } = latest;
	const crop =
		finding && t(`crop_said.${finding.cell.cropKey}`, { defaultValue: t(`common:crop.${finding.cell.cropKey}`) });
	const label = wordsIn(measure.label, i18n.language);
	return (
		<Page
			title={
				finding
					? t(`finding.${measure.key}`, {
							defaultValue: t("finding.other"),
							season: release.season,
							crop,
							measure: label,
						})
					: t("finding.none", { season: release.season })
			}
			lead={finding ? wordsIn(measure.description, i18n.language) : t("finding.noneLead")}
		>
			<div className="grid gap-x-10 gap-y-8 lg:grid-cols-[1fr_minmax(0,26rem)]">
				<div>
					{finding && (
						<div className="mb-8">
							<Figure {...finding.cell} unit={measure.unit} decimals={measure.decimals} size="headline" />
							<p className="mt-2 text-quiet">
								{t("home.of", {
									measure: label,
									crop: t(`common:crop.${finding.cell.cropKey}`),
									season: release.season,
								})}
							</p>
						</div>
					)}
					<Section title={t("home.crops", { measure: label, season: release.season })}>
						<CropTable
							caption={t("home.cropsCaption", { measure: label, season: release.season })}
							rows={rows}
							unit={measure.unit}
							decimals={measure.decimals}
							linkTo={(cropKey) => mapAddress(release.number, measure.key, cropKey)}
						/>
					</Section>
				</div>
				<HomeMap latest={latest} />
			</div>
			{children}
		</Page>
	);
}

function mapAddress(release: number, measure: string, crop: string): string {
	return `${href("/map")}?${new URLSearchParams({ release: `${release}`, measure, crop })}`;
}

function HomeMap({ latest: { release, measure, figures, picture } }: { latest: Latest }) {
	const { t, i18n } = useTranslation("public");
	if (!figures || !picture) return null;
	const title = t("map.shown", {
		measure: wordsIn(measure.label, i18n.language),
		crop: t(`common:crop.${figures.cropKey}`),
		season: release.season,
	});
	const shared = { cells: figures.cells, classes: figures.classes, hue: measure.hue };
	return (
		<figure>
			<StaticMap
				{...shared}
				picture={picture}
				areaOfCounty={figures.areaOfCounty}
				label={t("map.alternative", { title })}
			/>
			<figcaption className="mt-3">
				<Legend {...shared} title={title} notAsked={0} unit={measure.unit} decimals={measure.decimals} />
				<p className="no-print mt-4">
					<ButtonLink to={mapAddress(release.number, measure.key, figures.cropKey)} kind="secondary">
						{t("home.openMap")}
					</ButtonLink>
				</p>
			</figcaption>
		</figure>
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
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	return (
		<Section title={t("home.report")}>
			<p className="text-lg font-bold">
				<Link to={href("/reports/:slug", { slug: report.slug })}>{wordsIn(report.title, i18n.language)}</Link>
			</p>
			<p className="max-w-prose">{wordsIn(report.summary, i18n.language)}</p>
			<p className="mt-1 text-sm text-quiet">{format.dayOf(report.publishedAt)}</p>
		</Section>
	);
}
