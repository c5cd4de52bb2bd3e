import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-new";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { createForm } from "#app/collect/editing/form-drafts.server.ts";
import { listForms } from "#app/collect/editing/form-list.server.ts";
import { SomeText } from "#app/collect/editing/question.schema.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { parseForm } from "#app/lib/parse-form.ts";
import { useFormWords } from "./parts/forms/condition-words.ts";
import { TextPair, usePairLabels } from "./parts/forms/text-pair.tsx";

export async function loader({ context, request }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const forms = await desk.transaction((trx) => listForms(trx, desk.viewer));
	const from = new URL(request.url).searchParams.get("from");
	return { forms: forms.map(({ formId, title, isReady }) => ({ formId, title, isReady })), from };
}

const NewForm = z.object({ from: z.string().max(60).default(""), title: SomeText });

export async function action({ context, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(NewForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const { from, title } = form.value;
	const formId = await desk.transaction((trx) => createForm(trx, desk.viewer, title, from || undefined));
	if (formId === "not_found") {
		const problems = [{ field: "from", code: "choice_wrong" }];
		return data({ values: form.values, problems }, { status: 400 });
	}
	return redirect(href("/desk/forms/:formId", { formId }), 303);
}

export default function FormNew({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const { forms, from } = loaderData;
	const values = actionData?.values as { from?: string; title?: { en?: string; es?: string } } | undefined;
	const source = forms.find(({ formId }) => formId === from);
	const title = values?.title ?? source?.title;
	const inBoth = usePairLabels();
	return (
		<Page title={t("new.title")} lead={t("new.lead")} width="narrow">
			<ErrorSummary
				problems={actionData?.problems}
				labels={{ from: t("new.from"), ...inBoth({ title: t("form.title") }) }}
			/>
			<Form method="post" noValidate>
				<ChoiceField
					kind="select"
					name="from"
					legend={t("new.from")}
					help={t("new.fromHelp")}
					options={[
						{ value: "", label: t("new.blank") },
						...forms.map((form) => ({
							value: form.formId,
							label: said(form.title),
							group: form.isReady ? t("list.ready") : t("new.made"),
						})),
					]}
					defaultValue={values?.from ?? from ?? ""}
					problem={actionData?.problems.find(({ field }) => field === "from")}
				/>
				<TextPair
					name="title"
					label={t("form.title")}
					value={{ en: title?.en ?? "", es: title?.es ?? "" }}
					problems={actionData?.problems}
					isNew
				/>
				<Button>{t("new.make")}</Button>
			</Form>
		</Page>
	);
}
