import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/form-measures";
import { sessionContext } from "#app/auth/session.server.ts";
import { definitionOfDraft, findQuestion } from "#app/collect/editing/draft.ts";
import { renameMeasure } from "#app/collect/editing/rename-measure.ts";
import { textProblems, TypedTexts } from "#app/collect/editing/question.schema.ts";
import { Button } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Section } from "#app/components/section.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { useFormWords } from "./parts/forms/condition-words.ts";
import { getForm, getOwnForm, makeChange } from "./parts/forms/form-access.server.ts";
import { NotChangedNotice } from "./parts/forms/not-changed.tsx";
import { TextPair, usePairLabels } from "./parts/forms/text-pair.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const { form } = await getForm(context, params.formId);
	const { draft, mayEdit } = form;
	const measures = definitionOfDraft(draft).measures.filter(({ base }) => !base);
	return {
		mayEdit,
		measures: measures.map((measure) => ({
			key: measure.key,
			kind: measure.kind,
			label: measure.label,
			description: measure.description,
			isByDefault: !draft.measures.some(({ key }) => key === measure.key),
			questions: questionsOfMeasure(measure).flatMap((key) => {
				const question = findQuestion(draft, key)?.question;
				return question ? (question.label ?? question.text) : [];
			}),
		})),
	};
}

const Names = z.object({ key: z.string().max(120), label: TypedTexts.default({ en: "", es: "" }) });

export async function action({ context, params, request }: Route.ActionArgs) {
	const { desk } = await getOwnForm(context, params.formId);
	const parsed = parseForm(Names, await request.formData());
	if (!parsed.ok) throw refusal("form_not_understood");
	const { key, label } = parsed.value;
	const problems = [...textProblems("label", label, { needed: true })].map((problem) => ({
		...problem,
		field: `${key}.${problem.field}`,
	}));
	if (problems.length > 0) return data({ refused: null, key, label, problems }, { status: 400 });
	const made = await makeChange(desk, params.formId, (draft) => renameMeasure(draft, key, label));
	if (typeof made === "string") return data({ refused: made, key, label, problems: [] }, { status: 409 });
	context.get(sessionContext).flash("toast", { key: "forms:toast.saved" });
	return redirect(href("/desk/forms/:formId/measures", params), 303);
}

export const shouldRevalidate = lookAgain;

/** What the survey will estimate: of the questions that nothing was declared for, by default. Names can be changed. */
export default function FormMeasures({ loaderData, actionData }: Route.ComponentProps) {
	const { t } = useTranslation("forms");
	const { measures, mayEdit } = loaderData;
	const format = useFormat();
	const said = useFormWords();
	const labels = usePairLabels()(Object.fromEntries(measures.map(({ key }) => [`${key}.label`, t("measures.name")])));
	return (
		<>
			<ErrorSummary problems={actionData?.problems} labels={labels} />
			<NotChangedNotice answer={actionData} />
			<p className="max-w-prose">{t("measures.lead")}</p>
			{measures.length === 0 && <EmptyState title={t("measures.emptyTitle")}>{t("measures.emptyBody")}</EmptyState>}
			{measures.map((measure) => {
				const sent = actionData?.key === measure.key ? actionData : undefined;
				return (
					<Section key={measure.key} title={said(measure.label)} level={3}>
						<p className="max-w-prose">{said(measure.description)}</p>
						<p className="mb-3 text-sm text-quiet">
							{t(`measures.kind.${measure.kind}`)} {measure.isByDefault && t("measures.byDefault")}{" "}
							{measure.questions.length > 0 &&
								t("measures.from", { questions: format.list(measure.questions.map(said)) })}
						</p>
						{mayEdit && (
							<details open={sent !== undefined}>
								<summary className="inline-flex min-h-11 cursor-pointer items-center font-bold text-damson">
									{t("measures.rename")}
								</summary>
								<Form method="post" noValidate className="mt-3" preventScrollReset>
									<input type="hidden" name="key" value={measure.key} />
									<MeasureName
										measureKey={measure.key}
										value={sent?.label ?? measure.label}
										problems={sent?.problems}
									/>
									<Button kind="secondary" size="small">
										{t("measures.save")}
									</Button>
								</Form>
							</details>
						)}
					</Section>
				);
			})}
		</>
	);
}

type MeasureNameProps = {
	measureKey: string;
	value: { en: string; es: string };
	problems?: { field: string; code: string }[];
};

/** Many forms of one page have each a field "label": the address of a problem leads to its own by the measure's key. */
function MeasureName({ measureKey, value, problems }: MeasureNameProps) {
	const { t } = useTranslation("forms");
	const own = problems?.map((problem) => ({ ...problem, field: problem.field.slice(measureKey.length + 1) }));
	return (
		<div id={`field-${measureKey}.label.en`} tabIndex={-1}>
			<TextPair name="label" label={t("measures.name")} value={value} problems={own} />
		</div>
	);
}
