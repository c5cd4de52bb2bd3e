import { useTranslation } from "react-i18next";
import type { Route } from "./+types/answered";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { AnsweredQuery } from "#app/collect/answered.schema.ts";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Section } from "#app/components/section.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { refusal } from "#app/lib/refusal.ts";
import { AnsweredCurve } from "./parts/answered/answered-curve.tsx";
import { AnsweredFilters } from "./parts/answered/answered-filters.tsx";
import { OutcomeTables } from "./parts/answered/outcome-tables.tsx";
import { PartTable } from "./parts/answered/part-table.tsx";
import { readResponseRates } from "./parts/answered/response-rates.server.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = AnsweredQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const rates = await desk.transaction((trx) => readResponseRates(trx, desk.viewer, params.surveyId, query));
	if (!rates) throw refusal("survey_not_found");
	return { rates };
}

/** How many have answered, of whom, and how that came about from day to day. */
export default function Answered({ loaderData: { rates } }: Route.ComponentProps) {
	const { t } = useTranslation("answered");
	const format = useFormat();
	const { whole, query, curve, earlier } = rates;
	if (rates.survey.state === "draft")
		return <EmptyState title={t("rates.draftTitle")}>{t("rates.draftBody")}</EmptyState>;
	if (whole.asked.operations === 0)
		return <EmptyState title={t("rates.nobodyTitle")}>{t("rates.nobodyBody")}</EmptyState>;
	const share = (rate: number | null) =>
		rate === null ? t("rates.absent") : format.quantity(rate * 100, "percent", 1);
	const said = { counted: share(whole.response.counted.rr1), weighted: share(whole.response.weighted.rr1) };
	return (
		<>
			<TallyCount count={whole.answered.operations} of={whole.asked.operations} label={t("rates.answersIn")} />
			<p className="mt-3 max-w-prose text-lg">
				{t("rates.finding", said)}{" "}
				{earlier &&
					t("rates.findingBefore", {
						season: String(earlier.season),
						counted: share(earlier.whole.response.counted.rr1),
						weighted: share(earlier.whole.response.weighted.rr1),
					})}
			</p>
			<Section title={t("rates.byPart")}>
				<AnsweredFilters query={query} crops={rates.survey.cropKeys} />
				<PartTable rates={rates} />
			</Section>
			{curve && (
				<Section title={t("rates.overTime")}>
					<AnsweredCurve curve={curve} weigh={query.weigh} />
				</Section>
			)}
			<Section title={t("rates.became")}>
				<OutcomeTables rates={rates} />
			</Section>
		</>
	);
}
