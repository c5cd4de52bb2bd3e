import { useTranslation } from "react-i18next";
import { data, href, redirect } from "react-router";
import type { Route } from "./+types/answered";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { AnsweredQuery, LateForm } from "#app/collect/answered.schema.ts";
import { decideLate, listLateAnswers } from "#app/collect/late-answers.server.ts";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Section } from "#app/components/section.tsx";
import { TallyCount } from "#app/components/tally-count.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { AnsweredCurve } from "./parts/answered/answered-curve.tsx";
import { AnsweredFilters } from "./parts/answered/answered-filters.tsx";
import { LateAnswers } from "./parts/answered/late-answers.tsx";
import { OutcomeTables } from "./parts/answered/outcome-tables.tsx";
import { PartTable } from "./parts/answered/part-table.tsx";
import { readResponseRates } from "./parts/answered/response-rates.server.ts";

export async function loader({ context, params, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const query = AnsweredQuery.parse(Object.fromEntries(new URL(request.url).searchParams));
	const found = await desk.transaction(async (trx) => {
		const rates = await readResponseRates(trx, desk.viewer, params.surveyId, query);
		return rates && { rates, late: await listLateAnswers(trx, desk.viewer, params.surveyId) };
	});
	if (!found) throw refusal("survey_not_found");
	return found;
}

/** Takes in a late answer, or leaves it. */
export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(LateForm, await request.formData());
	if (!form.ok && form.problems.some(({ field }) => field !== "reason")) throw refusal("form_not_understood");
	if (!form.ok) return data({ values: form.values, problems: form.problems, refused: null }, { status: 400 });

	const { step, ...late } = form.value;
	const choice = { ...late, surveyId: params.surveyId, take: step === "take" };
	const outcome = await desk.transaction((trx) => decideLate(trx, desk.viewer, choice));
	if (outcome === "not_found") throw refusal("response_not_found");
	if (outcome === "already_drafted")
		return data({ refused: outcome, values: form.values, problems: [] }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: `answered:late.toast.${outcome}` });
	return redirect(href("/desk/surveys/:surveyId/answered", params), 303);
}

export const shouldRevalidate = lookAgain;

/** How many have answered, of whom, and how that came about from day to day. */
export default function Answered({ loaderData: { rates, late }, actionData, params }: Route.ComponentProps) {
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
			<ErrorSummary problems={actionData?.problems} labels={{ reason: t("late.reason") }} />
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
			{late.length > 0 && <LateAnswers late={late} surveyId={params.surveyId} chosen={query.late} {...actionData} />}
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
