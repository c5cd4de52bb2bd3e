import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/brief";
import { requireAssociate } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { BriefForm, plannedRows } from "#app/collect/brief.schema.ts";
import { findBrief, saveBrief } from "#app/collect/brief.server.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { findRealSurvey } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Notice } from "#app/components/notice.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import { lookAgain } from "#app/lib/look-again.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { readPlanKept } from "./parts/brief/plan-kept.server.ts";
import { PlannedFields } from "./parts/brief/planned-fields.tsx";
import { PlanTable } from "./parts/brief/plan-table.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const brief = await findBrief(trx, desk.viewer, params.surveyId);
		const survey = await findRealSurvey(trx, desk.viewer, params.surveyId);
		if (!brief || !survey) return undefined;
		const measures = await listMeasures(trx, params.surveyId);
		const held = brief.planned.length > 0 ? await readPlanKept(trx, params.surveyId, brief.planned) : null;
		return { brief, cropKeys: survey.cropKeys, measures, held };
	});
	if (!found) throw refusal("survey_not_found");
	return found;
}

/** What the survey's form can tell. */
async function listMeasures(trx: Trx, surveyId: string) {
	const form = await findSurveyForm(trx, surveyId);
	return (form?.measures ?? []).filter(({ base }) => !base).map(({ key, label }) => ({ key, label }));
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(BriefForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems, meanwhile: false }, { status: 400 });
	const { planned, ...brief } = form.value;
	const rows = planned.filter(({ measureKey }) => measureKey !== "");
	const outcome = await desk.transaction(async (trx) => {
		if (!(await findRealSurvey(trx, desk.viewer, params.surveyId))) return "not_found";
		const known = new Set((await listMeasures(trx, params.surveyId)).map(({ key }) => key));
		const unknown = planned.findIndex(({ measureKey }) => measureKey !== "" && !known.has(measureKey));
		if (unknown >= 0) return { field: `planned[${unknown}].measureKey`, code: "choice_wrong" };
		return saveBrief(trx, desk.viewer, params.surveyId, {
			...brief,
			planned: rows.map(({ smallestN, largestCv, ...row }) => ({
				...row,
				smallestN: smallestN ?? null,
				largestCv: largestCv === undefined ? null : largestCv / 100,
			})),
		});
	});
	if (outcome === "not_found") throw refusal("survey_not_found");
	if (outcome === "changed_meanwhile")
		return data({ values: form.values, problems: [], meanwhile: true }, { status: 409 });
	if (typeof outcome === "object")
		return data({ values: form.values, problems: [outcome], meanwhile: false }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: "desk:brief.saved" });
	return redirect(href("/desk/surveys/:surveyId/brief", params), 303);
}

export const shouldRevalidate = lookAgain;

export default function BriefPage({ loaderData, actionData }: Route.ComponentProps) {
	const { t, i18n } = useTranslation("desk");
	const { brief, cropKeys, held } = loaderData;
	const measures = loaderData.measures.map(({ key, label }) => ({ key, label: wordsIn(label, i18n.language) }));
	const values: Record<string, unknown> | undefined = actionData?.values;
	const problems = actionData?.problems;
	const text = (name: "why" | "askedBy" | "decision", max: number) => ({
		name,
		label: t(`brief.${name}`),
		help: t(`brief.${name}Help`),
		defaultValue: values ? String(values[name] ?? "") : brief[name],
		problem: problems?.find(({ field }) => field === name),
		maxLength: max,
		optional: true,
	});
	return (
		<>
			<p className="mb-6 max-w-prose">{t("brief.lead")}</p>
			<ErrorSummary problems={problems} labels={labelsOf(t)} />
			{actionData?.meanwhile && (
				<Notice tone="attention" title={t("brief.meanwhile.title")}>
					<p>{t("brief.meanwhile.body")}</p>
				</Notice>
			)}
			{held && (
				<PlanTable
					planned={brief.planned}
					held={held}
					labelOf={new Map(measures.map(({ key, label }) => [key, label]))}
				/>
			)}
			<Form key={brief.version} method="post" noValidate className={held ? "mt-10" : undefined}>
				{/* After somebody else's change the next press is meant to go over it. */}
				<input type="hidden" name="version" value={brief.version} />
				<div className="max-w-3xl">
					<TextField {...text("why", 2000)} multiline rows={3} />
					<TextField {...text("askedBy", 300)} size="full" />
					<TextField {...text("decision", 2000)} multiline rows={3} />
				</div>
				<Section title={t("brief.plannedTitle")}>
					<p className="mb-4 max-w-prose">{t("brief.plannedLead")}</p>
					<PlannedFields
						planned={brief.planned}
						typed={values ? ((values.planned as Record<string, string>[] | undefined) ?? []) : undefined}
						problems={problems}
						measures={measures}
						cropKeys={cropKeys}
					/>
				</Section>
				<Button>{t("brief.save")}</Button>
			</Form>
		</>
	);
}

function labelsOf(t: (key: string) => string): Record<string, string> {
	const fields = ["measureKey", "cropKey", "level", "smallestN", "largestCv"] as const;
	const names = {
		measureKey: "measure",
		cropKey: "crop",
		level: "level",
		smallestN: "smallestN",
		largestCv: "largestCv",
	};
	const rows = Array.from({ length: plannedRows }, (_, at) =>
		fields.map((field) => [`planned[${at}].${field}`, t(`brief.${names[field]}`)] as const),
	);
	return Object.fromEntries([
		...(["why", "askedBy", "decision"] as const).map((name) => [name, t(`brief.${name}`)] as const),
		...rows.flat(),
	]);
}
