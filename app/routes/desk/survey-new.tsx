import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/survey-new";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { listForms } from "#app/collect/editing/form-list.server.ts";
import { SurveyDraft } from "#app/collect/survey-draft.schema.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { cropKeys } from "#app/directory/crops.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { parseForm } from "#app/lib/parse-form.ts";

export async function loader({ context }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const listed = await desk.transaction((trx) => listForms(trx, desk.viewer));
	const forms = listed
		.filter(({ isReady, version }) => isReady || version !== null)
		.map(({ formKey, title }) => ({ key: formKey, title }));
	return { stateFips: desk.viewer.stateFips, season: new Date().getUTCFullYear(), forms };
}

export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(SurveyDraft, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const made = await desk.transaction((trx) => createSurvey(trx, desk.viewer, form.value));
	if (made.problems)
		return data({ values: form.value as Record<string, unknown>, problems: made.problems }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: "desk:surveyNew.made" });
	return redirect(href("/desk/surveys/:surveyId", { surveyId: made.surveyId }), 303);
}

export default function SurveyNew({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const { stateFips, season, forms } = loaderData;
	const values: Record<string, unknown> = actionData?.values ?? {};
	const typed = (name: string, otherwise = "") => {
		const value = values[name];
		return typeof value === "string" || typeof value === "number" ? String(value) : actionData ? "" : otherwise;
	};
	const chosen = (name: string, otherwise: string[]) =>
		actionData ? [values[name] ?? []].flat().map(String) : otherwise;
	const problemOf = (field: string) => actionData?.problems.find((problem) => problem.field === field);
	const text = (name: "titleEn" | "titleEs" | "season" | "closesOn" | "closesAt", otherwise = "") => ({
		name,
		label: t(`surveyNew.${name}`),
		defaultValue: typed(name, otherwise),
		problem: problemOf(name),
	});
	const fields = [
		"formKey",
		"season",
		"titleEn",
		"titleEs",
		"crops",
		"states",
		"closesOn",
		"closesAt",
		"timeZone",
	] as const;
	return (
		<Page title={t("surveyNew.title")} lead={t("surveyNew.lead")} width="narrow">
			<ErrorSummary
				problems={actionData?.problems}
				labels={Object.fromEntries(fields.map((field) => [field, t(`surveyNew.${field}`)]))}
			/>
			<Form method="post" noValidate className="grid gap-6">
				<input type="hidden" name="timeZone" value="America/Chicago" />
				<ChoiceField
					kind="select"
					name="formKey"
					legend={t("surveyNew.formKey")}
					options={forms.map(({ key, title }) => ({ value: key, label: wordsIn(title, i18n.language) }))}
					defaultValue={typed("formKey", "after_harvest")}
					problem={problemOf("formKey")}
				/>
				<TextField {...text("season", String(season))} inputMode="numeric" size="short" maxLength={4} />
				<TextField {...text("titleEn")} maxLength={120} help={t("surveyNew.titleHelp")} optional />
				<TextField {...text("titleEs")} maxLength={120} help={t("surveyNew.titleHelp")} optional />
				<ChoiceField
					kind="checkbox"
					name="crops"
					legend={t("surveyNew.crops")}
					options={cropKeys.map((key) => ({ value: key, label: t(`common:crop.${key}`) }))}
					defaultValue={chosen("crops", [...cropKeys])}
					problem={problemOf("crops")}
				/>
				<ChoiceField
					kind="checkbox"
					name="states"
					legend={t("surveyNew.states")}
					options={stateFips.map((key) => ({ value: key, label: t(`common:state.${key}`) }))}
					defaultValue={chosen("states", stateFips)}
					problem={problemOf("states")}
				/>
				<TextField {...text("closesOn")} type="date" size="medium" />
				<TextField {...text("closesAt", "17:00")} type="time" size="short" help={t("surveyNew.zone")} />
				<div>
					<Button>{t("surveyNew.save")}</Button>
				</div>
			</Form>
		</Page>
	);
}
