import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import type { Route } from "./+types/survey-edit";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { wallClockOf } from "#app/collect/survey-closing.ts";
import { SurveyChange } from "#app/collect/survey-draft.schema.ts";
import { changeDraft } from "#app/collect/survey-mending.server.ts";
import { findRealSurvey, listStateClocks } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { findAllProblems } from "./parts/draft-problems.server.ts";
import { SurveyFields, surveyFieldLabels } from "./parts/survey-fields.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const survey = await findRealSurvey(trx, desk.viewer, params.surveyId);
		return survey && { survey, clocks: await listStateClocks(trx, desk.viewer) };
	});
	if (!found) throw refusal("survey_not_found");
	const { survey, clocks } = found;
	const { on, at } = wallClockOf(survey.closesAt, survey.timeZone);
	return {
		mayChange: survey.state === "draft" && survey.statesNotHeld.length === 0,
		isDraft: survey.state === "draft",
		stateFips: desk.viewer.stateFips,
		clocks,
		values: {
			season: survey.season,
			titleEn: survey.title.en,
			titleEs: survey.title.es,
			crops: survey.cropKeys,
			states: survey.stateFips,
			closesOn: on,
			closesAt: at,
		},
	};
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const sent = await request.formData();
	const form = parseForm(SurveyChange, sent);
	if (!form.ok) {
		const problems = await findAllProblems(desk, SurveyChange, sent, form.problems);
		return data({ refused: null, values: form.values, problems }, { status: 400 });
	}

	const outcome = await desk.transaction((trx) => changeDraft(trx, desk.viewer, params.surveyId, form.value));
	if (outcome === "not_found") throw refusal("survey_not_found");
	const { values } = form;
	if (typeof outcome === "object") return data({ refused: null, values, problems: outcome.problems }, { status: 400 });
	if (outcome !== "changed") return data({ refused: outcome, values, problems: [] }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "desk:surveyEdit.changed" });
	return redirect(href("/desk/surveys/:surveyId", params), 303);
}

export const shouldRevalidate = lookAgain;

/** A draft's title, season, crops, states and closing time, as long as nobody is asked. */
export default function SurveyEdit({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("desk");
	const { mayChange, isDraft, stateFips, clocks } = loaderData;
	const back = href("/desk/surveys/:surveyId", params);
	return (
		<Section title={t("surveyEdit.title")}>
			<ErrorSummary problems={actionData?.problems} labels={surveyFieldLabels(t)} />
			{mayChange ? (
				<Form method="post" noValidate className="grid max-w-2xl gap-6">
					<p>{t("surveyEdit.lead")}</p>
					<SurveyFields
						stateFips={stateFips}
						clocks={clocks}
						values={actionData?.values ?? loaderData.values}
						problems={actionData?.problems}
					/>
					<div className="flex flex-wrap items-center gap-4">
						<Button>{t("surveyEdit.save")}</Button>
						<Link to={back} className="inline-flex min-h-11 items-center">
							{t("surveyEdit.back")}
						</Link>
					</div>
				</Form>
			) : (
				<Notice tone="attention">
					<p>{t(isDraft ? "survey.refused.states_not_held" : "survey.refused.not_a_draft")}</p>
					<Link to={back}>{t("surveyEdit.back")}</Link>
				</Notice>
			)}
		</Section>
	);
}
