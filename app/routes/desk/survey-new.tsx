import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/survey-new";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { listForms } from "#app/collect/editing/form-list.server.ts";
import { SurveyDraft } from "#app/collect/survey-draft.schema.ts";
import { createSurvey, listStateClocks } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { cropKeys } from "#app/directory/crops.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { type FormValues, parseForm } from "#app/lib/parse-form.ts";
import { findAllProblems } from "./parts/draft-problems.server.ts";
import { SurveyFields, surveyFieldLabels } from "./parts/survey-fields.tsx";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const { listed, clocks } = await desk.transaction(async (trx) => ({
		listed: await listForms(trx, desk.viewer),
		clocks: await listStateClocks(trx, desk.viewer),
	}));
	const forms = listed
		.filter(({ isReady, version }) => isReady || version !== null)
		.map(({ formKey, title }) => ({ key: formKey, title }));
	return { stateFips: desk.viewer.stateFips, clocks, season: new Date().getUTCFullYear(), forms };
}

export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const sent = await request.formData();
	const form = parseForm(SurveyDraft, sent);
	if (!form.ok) {
		const problems = await findAllProblems(desk, SurveyDraft, sent, form.problems);
		return data({ values: form.values, problems }, { status: 400 });
	}

	const made = await desk.transaction((trx) => createSurvey(trx, desk.viewer, form.value));
	if (made.problems)
		return data({ values: form.value as Record<string, unknown>, problems: made.problems }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: "desk:surveyNew.made" });
	return redirect(href("/desk/surveys/:surveyId", { surveyId: made.surveyId }), 303);
}

export default function SurveyNew({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const { stateFips, clocks, season, forms } = loaderData;
	const values: FormValues = actionData?.values ?? {
		formKey: "after_harvest",
		season,
		crops: [...cropKeys],
		states: stateFips,
		closesAt: "17:00",
	};
	return (
		<Page title={t("surveyNew.title")} lead={t("surveyNew.lead")} width="narrow">
			<ErrorSummary problems={actionData?.problems} labels={surveyFieldLabels(t)} />
			<Form method="post" noValidate className="grid gap-6">
				<ChoiceField
					kind="select"
					name="formKey"
					legend={t("surveyNew.formKey")}
					options={forms.map(({ key, title }) => ({ value: key, label: wordsIn(title, i18n.language) }))}
					defaultValue={String(values.formKey ?? "")}
					problem={actionData?.problems.find(({ field }) => field === "formKey")}
				/>
				<SurveyFields stateFips={stateFips} clocks={clocks} values={values} problems={actionData?.problems} />
				<div>
					<Button>{t("surveyNew.save")}</Button>
				</div>
			</Form>
		</Page>
	);
}
