import { useTranslation } from "react-i18next";
import { Form, href, Link } from "react-router";
import type { Route } from "./+types/estimates-compared";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Paging } from "#app/components/paging.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { listComparedEstimates } from "./parts/estimates/compared-estimates.server.ts";
import { ComparedTable } from "./parts/estimates/compared-table.tsx";
import { ComparedQuery } from "./parts/estimates/estimates.schema.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = ComparedQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction((trx) => listComparedEstimates(trx, desk.viewer, params.surveyId, query));
	if (!found) throw refusal("survey_not_found");
	return found;
}

/** What corrections have moved since the release was drafted. */
export default function EstimatesCompared({ loaderData, params }: Route.ComponentProps) {
	const { query, crops, draftedAt, isReweighted, timeZone, changed, page, pageCount, total } = loaderData;
	const { t } = useTranslation("release");
	const format = useFormat();
	return (
		<>
			<p>
				<Link to={href("/desk/surveys/:surveyId/estimates", params)} className="inline-flex min-h-11 items-center">
					← {t("origin.back")}
				</Link>
			</p>
			<Section title={t("compared.title")}>
				<Notice tone="attention" title={t("estimates.mark")}>
					{t("estimates.markBody")}
				</Notice>
				{draftedAt && (
					<p className="mb-4 max-w-prose">
						{t("compared.drafted", { moment: format.moment(draftedAt, timeZone) })}{" "}
						{t("compared.changed", { count: changed, value: format.number(changed) })}
						{isReweighted && ` ${t("compared.reweighted")}`}
					</p>
				)}
				<Form method="get" className="mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
					<ChoiceField
						kind="select"
						name="crop"
						legend={t("estimates.crop")}
						defaultValue={query.crop}
						options={crops.map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }))}
					/>
					<ChoiceField
						kind="select"
						name="show"
						legend={t("estimates.show")}
						defaultValue={query.show}
						options={(["changed", "all"] as const).map((show) => ({ value: show, label: t(`compared.show.${show}`) }))}
					/>
					<Button kind="secondary">{t("estimates.show")}</Button>
				</Form>
				<ComparedTable {...loaderData} isDrafted={draftedAt !== null} />
				{total > 0 && <Paging page={page} pageCount={pageCount} total={total} />}
			</Section>
		</>
	);
}
