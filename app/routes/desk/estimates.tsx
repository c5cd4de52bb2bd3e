import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/estimates";
import { requireAssociate } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { isSummed } from "#app/collect/form.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { DataTable } from "#app/components/data-table.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Figure } from "#app/components/figure.tsx";
import { Notice } from "#app/components/notice.tsx";
import { listAreas } from "#app/directory/areas.server.ts";
import { estimateSurvey } from "#app/estimate/survey.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listFrameStrata, listTallies } from "#app/tally/tally.server.ts";

const Choice = z.object({
	crop: z.string().catch("all"),
	kind: z.enum(["county", "district", "state"]).catch("district"),
});

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const choice = Choice.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction((trx) => draftEstimates(trx, desk.viewer, params.surveyId, choice));
	if (!found) throw refusal("survey_not_found");
	return { ...found, choice };
}

/** Estimates of the viewer's own states, made afresh from the tallies that the viewer may see. */
async function draftEstimates(trx: Trx, viewer: Associate, surveyId: string, choice: z.infer<typeof Choice>) {
	const survey = await findSurvey(trx, viewer, surveyId);
	const definition = survey && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	const areas = await listAreas(trx, viewer.stateFips);
	const parentOf = new Map(areas.map((area) => [area.key, area.parentKey]));
	const pathOf = (key: string): string[] => [key, ...(parentOf.get(key) ? pathOf(parentOf.get(key)!) : [])];
	const measures = definition.measures
		.filter(isSummed)
		.filter((measure) => !measure.base && (choice.crop !== "all" || measure.acrossCrops));
	const { estimates } = estimateSurvey({
		measures,
		frame: await listFrameStrata(trx, surveyId),
		tallies: (await listTallies(trx, surveyId)).filter((tally) => tally.cropKey === choice.crop),
		areasOfCounty: new Map(areas.filter((area) => area.kind === "county").map((area) => [area.key, pathOf(area.key)])),
	});
	const byArea = new Map(areas.map((area) => [area.key, area]));
	const rows = areas
		.filter((area) => area.kind === choice.kind)
		.map((area) => ({
			areaKey: area.key,
			name: area.name,
			parent: byArea.get(area.parentKey ?? "")?.name ?? "",
			estimates: estimates.filter((estimate) => estimate.areaKey === area.key),
		}))
		.filter((row) => row.estimates.length > 0);
	return { measures, rows, cropKeys: survey.cropKeys };
}

export default function Estimates({ loaderData }: Route.ComponentProps) {
	const { measures, rows, cropKeys, choice } = loaderData;
	const { t, i18n } = useTranslation("release");
	const format = useFormat();
	return (
		<>
			<Notice tone="attention" title={t("estimates.mark")}>
				{t("estimates.markBody")}
			</Notice>
			<Form method="get" className="mb-5 flex flex-wrap items-end gap-4 *:mb-0">
				<ChoiceField
					kind="select"
					name="crop"
					legend={t("estimates.crop")}
					defaultValue={choice.crop}
					options={["all", ...cropKeys].map((key) => ({ value: key, label: t(`common:crop.${key}`) }))}
				/>
				<ChoiceField
					kind="select"
					name="kind"
					legend={t("estimates.level")}
					defaultValue={choice.kind}
					options={(["state", "district", "county"] as const).map((kind) => ({
						value: kind,
						label: t(`common:areaKind.plural.${kind}`),
					}))}
				/>
				<Button kind="secondary">{t("estimates.show")}</Button>
			</Form>
			<DataTable
				caption={t("estimates.caption", { crop: t(`common:crop.${choice.crop}`) })}
				rows={rows}
				rowKey={(row) => row.areaKey}
				columns={[
					{
						key: "area",
						header: t(`common:areaKind.${choice.kind}`),
						cell: (row) => (
							<>
								{row.name}
								{choice.kind !== "state" && <span className="block text-xs text-quiet">{row.parent}</span>}
							</>
						),
					},
					{
						key: "answers",
						header: t("estimates.answers"),
						numeric: true,
						cell: (row) => format.number(Math.max(...row.estimates.map((estimate) => estimate.respondents))),
					},
					...measures.map((measure) => ({
						key: measure.key,
						header: wordsIn(measure.label, i18n.language),
						numeric: true,
						cell: (row: (typeof rows)[number]) => {
							const estimate = row.estimates.find((one) => one.measureKey === measure.key);
							if (!estimate) return t("estimates.none");
							return (
								<Figure
									status="shown"
									value={estimate.value}
									lower={estimate.lower}
									upper={estimate.upper}
									unit={measure.unit}
									decimals={measure.decimals}
									steadiness={estimate.steadiness}
								/>
							);
						},
					})),
				]}
				empty={<EmptyState title={t("estimates.emptyTitle")}>{t("estimates.emptyBody")}</EmptyState>}
			/>
		</>
	);
}
