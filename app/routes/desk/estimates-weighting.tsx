import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/estimates-weighting";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Weighting, weightings } from "#app/collect/weighting.ts";
import { chooseWeighting } from "#app/collect/weighting.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Paging } from "#app/components/paging.tsx";
import { CalibrationTable } from "#app/components/release/calibration-table.tsx";
import { Section } from "#app/components/section.tsx";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { areaLevels, WeightingQuery } from "./parts/estimates/estimates.schema.ts";
import { ReweightedTable } from "./parts/estimates/reweighted-table.tsx";
import { previewWeighting } from "./parts/estimates/weighting-preview.server.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = WeightingQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction((trx) => previewWeighting(trx, desk.viewer, params.surveyId, query));
	if (!found) throw refusal("survey_not_found");
	return found;
}

const Sent = z.object({ weighting: z.enum(Weighting.options, "choice_wrong") });

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(Sent, await request.formData());
	if (!form.ok) return data({ refused: null, problems: form.problems }, { status: 400 });

	const { weighting } = form.value;
	const outcome = await desk.transaction((trx) => chooseWeighting(trx, desk.viewer, params.surveyId, weighting));
	if (outcome === "not_found") throw refusal("survey_not_found");
	const problems: Problem[] = [];
	if (outcome === "states_not_held" || outcome === "already_drafted")
		return data({ refused: outcome, problems }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "release:weighting.toast" });
	return redirect(href("/desk/surveys/:surveyId/estimates/weighting", params), 303);
}

export const shouldRevalidate = lookAgain;

/** By which weights a survey's figures are made, and what each choice would change. */
export default function EstimatesWeighting({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("release");
	const { calibrations, measures, page, pageCount, total } = loaderData;
	return (
		<>
			<p>
				<Link to={href("/desk/surveys/:surveyId/estimates", params)} className="inline-flex min-h-11 items-center">
					← {t("origin.back")}
				</Link>
			</p>
			<ErrorSummary problems={actionData?.problems} labels={{ weighting: t("weighting.title") }} />
			{actionData?.refused && <Notice tone="attention">{t(`weighting.refused.${actionData.refused}`)}</Notice>}
			<WeightingChoice {...loaderData} problems={actionData?.problems} />
			<Section title={t("weighting.preview.title")}>
				<Notice tone="attention" title={t("estimates.mark")}>
					{t("estimates.markBody")}
				</Notice>
				<p className="mb-4 max-w-prose">{t("weighting.preview.body")}</p>
				<PreviewFilters {...loaderData} />
				<ReweightedTable {...loaderData} />
				{total > 0 && <Paging page={page} pageCount={pageCount} total={total} />}
			</Section>
			{calibrations.length > 0 && (
				<Section title={t("weighting.how.title")}>
					<p className="mb-4 max-w-prose">{t("weighting.how.body")}</p>
					<CalibrationTable calibrations={calibrations} measures={measures} />
				</Section>
			)}
		</>
	);
}

type LoaderData = Route.ComponentProps["loaderData"];

function WeightingChoice({ weighting, mayManage, isDrafted, problems }: LoaderData & { problems?: Problem[] }) {
	const { t } = useTranslation("release");
	const fixed = isDrafted ? "already_drafted" : mayManage ? null : "states_not_held";
	return (
		<Section title={t("weighting.title")}>
			{fixed ? (
				<>
					<p className="max-w-prose">
						<strong>{t(`weighting.choice.${weighting}.name`)}.</strong> {t(`weighting.choice.${weighting}.help`)}
					</p>
					<p className="mt-3 max-w-prose text-quiet">{t(`weighting.refused.${fixed}`)}</p>
				</>
			) : (
				<Form key={weighting} method="post" noValidate>
					<ChoiceField
						kind="radio"
						name="weighting"
						legend={t("weighting.legend")}
						help={t("weighting.help")}
						defaultValue={weighting}
						options={weightings.map((value) => ({
							value,
							label: t(`weighting.choice.${value}.name`),
							help: t(`weighting.choice.${value}.help`),
						}))}
						problem={problems?.find(({ field }) => field === "weighting")}
					/>
					<Button>{t("weighting.save")}</Button>
				</Form>
			)}
		</Section>
	);
}

/** What is compared, sent by GET so that a link keeps it. */
function PreviewFilters({ query, crops }: LoaderData) {
	const { t } = useTranslation("release");
	const selects = {
		try: weightings.slice(1).map((one) => ({ value: one as string, label: t(`weighting.choice.${one}.name`) })),
		crop: crops.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) })),
		level: areaLevels.map((level) => ({ value: level as string, label: t(`estimates.levels.${level}`) })),
	};
	const legends = { try: t("weighting.preview.try"), crop: t("estimates.crop"), level: t("estimates.level") };
	return (
		<Form method="get" className="mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
			{(["try", "crop", "level"] as const).map((name) => (
				<ChoiceField
					key={name}
					kind="select"
					name={name}
					legend={legends[name]}
					defaultValue={query[name]}
					options={selects[name]}
				/>
			))}
			<Button kind="secondary">{t("weighting.preview.show")}</Button>
		</Form>
	);
}
