import type { ReactNode } from "react";
import { useTranslation } from "react-i18next";
import { href } from "react-router";
import { ButtonLink } from "#app/components/button.tsx";
import { Figure } from "#app/components/figure.tsx";
import { Legend } from "#app/components/map/legend.tsx";
import { type DrawnPicture, StaticMap } from "#app/components/map/static-map.tsx";
import { countUnasked } from "#app/components/map/unasked.ts";
import { Page } from "#app/components/page.tsx";
import { CropTable } from "#app/components/report/crop-table.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { CropCell } from "#app/publish/cell.ts";
import type { MapFigures } from "#app/publish/figures.server.ts";
import type { Finding } from "#app/publish/finding.ts";
import type { Release, ReleaseMeasure } from "#app/publish/release.ts";

export type Latest = {
	release: Release;
	measure: ReleaseMeasure;
	finding: Finding | null;
	rows: CropCell[];
	figures: MapFigures | undefined;
	picture: DrawnPicture | null;
};

type FindingPageProps = { latest: Latest; notice: ReactNode; children: ReactNode };

/** What the season brought as one sentence, then how sure it is, the map, and the crops side by side. */
export function FindingPage({ latest, notice, children }: FindingPageProps) {
	const { t, i18n } = useTranslation("public");
	const { release, measure, rows } = latest;
	const label = wordsIn(measure.label, i18n.language);
	const shown = { measure: label, season: release.season };
	return (
		<Page title={useSentence(latest)} lead={wordsIn(measure.description, i18n.language)}>
			{notice}
			<div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-8 lg:grid-cols-[minmax(0,1fr)_minmax(0,26rem)] lg:grid-rows-[auto_1fr]">
				<Headline latest={latest} />
				<HomeMap latest={latest} />
				<div>
					<Section title={t("home.crops", shown)}>
						<CropTable
							captionHidden
							caption={t("home.cropsCaption", shown)}
							rows={rows}
							measure={measure}
							linkTo={(cropKey) => mapAddress(release.number, measure.key, cropKey)}
						/>
					</Section>
				</div>
			</div>
			{children}
		</Page>
	);
}

function useSentence({ release, measure, finding }: Latest): string {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	if (!finding) return t("finding.none", { season: release.season });
	const { cropKey, value } = finding.cell;
	return t([`finding.${measure.key}`, "finding.other"], {
		season: release.season,
		crop: t([`crop_said.${cropKey}`, `common:crop.${cropKey}`]),
		measure: wordsIn(measure.label, i18n.language),
		value: format.figure(value, measure),
	});
}

function Headline({ latest: { release, measure, finding } }: { latest: Latest }) {
	const { t, i18n } = useTranslation("public");
	if (!finding) return <p className="mb-8 max-w-prose text-lg">{t("finding.noneLead")}</p>;
	const label = wordsIn(measure.label, i18n.language);
	return (
		<div>
			<Figure {...finding.cell} measure={measure} size="headline" />
			<p className="mt-2 text-quiet">
				{t("home.of", { measure: label, crop: t(`common:crop.${finding.cell.cropKey}`), season: release.season })}
			</p>
		</div>
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
		<figure className="lg:col-start-2 lg:row-span-2 lg:row-start-1">
			<StaticMap
				{...shared}
				picture={picture}
				areaOfCounty={figures.areaOfCounty}
				label={t("map.alternative", { title })}
			/>
			<figcaption className="mt-3">
				<Legend {...shared} title={title} unasked={countUnasked({ ...figures, picture })} measure={measure} />
				<p className="no-print mt-4">
					<ButtonLink to={mapAddress(release.number, measure.key, figures.cropKey)} kind="secondary">
						{t("home.openMap")}
					</ButtonLink>
				</p>
			</figcaption>
		</figure>
	);
}
