import { useTranslation } from "react-i18next";
import { href, Link } from "react-router";
import type { Route } from "./+types/estimate";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { ButtonLink } from "#app/components/button.tsx";
import { useAreaName } from "#app/components/map/area-name.ts";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { FigureCalibration } from "./parts/estimates/figure-calibration.tsx";
import { FigureFacts, FigureFormula } from "./parts/estimates/figure-facts.tsx";
import { requireFigureOrigin } from "./parts/estimates/figure-origin.server.ts";
import { FigureResponse } from "./parts/estimates/figure-response.tsx";
import { FigureSeasonsPart } from "./parts/estimates/figure-seasons.tsx";
import { FigureStrata } from "./parts/estimates/figure-strata.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	return requireFigureOrigin(desk, params);
}

/** How one draft figure was made, number by number. */
export default function Estimate({ loaderData, params }: Route.ComponentProps) {
	const { measure, cropKey, area } = loaderData;
	const { t, i18n } = useTranslation("release");
	const nameArea = useAreaName();
	const title = t("origin.title", {
		measure: wordsIn(measure.label, i18n.language),
		crop: t(`common:crop.${cropKey}`),
		area: area.name ? nameArea({ areaKey: area.key, areaName: area.name, kind: area.kind }) : t("estimates.ownStates"),
	});
	return (
		<>
			<p>
				<Link
					to={`${href("/desk/surveys/:surveyId/estimates", params)}?crop=${encodeURIComponent(cropKey)}`}
					className="inline-flex min-h-11 items-center"
				>
					← {t("origin.back")}
				</Link>
			</p>
			<Section
				title={title}
				actions={
					<ButtonLink
						kind="secondary"
						reloadDocument
						to={href("/desk/surveys/:surveyId/estimates/:areaKey/:cropKey/:measureKey/figure.csv", params)}
					>
						{t("origin.download")}
					</ButtonLink>
				}
			>
				<p className="max-w-prose">{wordsIn(measure.description, i18n.language)}</p>
				<Notice tone="attention" title={t("estimates.mark")}>
					{t("estimates.markBody")}
				</Notice>
				<FigureFacts told={loaderData} />
			</Section>
			<FigureSeasonsPart seasons={loaderData.seasons} measure={measure} place={params} />
			<FigureFormula told={loaderData} />
			<FigureStrata told={loaderData} />
			<FigureCalibration told={loaderData} />
			<FigureResponse told={loaderData} />
		</>
	);
}
