import { useTranslation } from "react-i18next";
import { data, Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/grower-edit";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { cleanText } from "#app/collect/typed-text.ts";
import { isMassUnit, unitsFor } from "#app/collect/units.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { listAreas } from "#app/directory/areas.server.ts";
import { editOperation } from "#app/directory/edit-operation.server.ts";
import { findOperation } from "#app/directory/operations.server.ts";
import { languages } from "#app/i18n/language.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const operation = await findOperation(trx, desk.viewer, params.operationId);
		if (operation?.status !== "active") return undefined;
		const areas = await listAreas(trx, desk.viewer.stateFips);
		return { operation, counties: areas.filter(({ kind }) => kind === "county") };
	});
	if (!found) throw refusal("operation_not_found");
	return found;
}

const text = (max: number) =>
	z.string({ error: "empty" }).transform(cleanText).pipe(z.string().min(1, "empty").max(max, "too_long"));
const EditForm = z.object({
	name: text(200),
	contactName: text(200),
	phone: z
		.string()
		.transform(cleanText)
		.pipe(z.string().max(40, "too_long"))
		.optional()
		.transform((phone) => phone || null),
	countyFips: z.string({ error: "empty" }).regex(/^\d{5}$/, "unknown_county"),
	language: z.enum(languages, "choice_wrong"),
	massUnit: z.string("choice_wrong").refine(isMassUnit, "choice_wrong"),
});

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const form = parseForm(EditForm, await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const outcome = await desk.transaction((trx) => editOperation(trx, desk.viewer, params.operationId, form.value));
	if (outcome === "not_found") throw refusal("operation_not_found");
	if (outcome === "unknown_county")
		return data({ values: form.values, problems: [{ field: "countyFips", code: "unknown_county" }] }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: "growers:edit.saved" });
	return redirect(href("/desk/growers/:operationId", params), 303);
}

const fields = ["name", "contactName", "phone", "countyFips", "language", "massUnit"] as const;

export default function GrowerEdit({ loaderData, actionData, params }: Route.ComponentProps) {
	const { operation, counties } = loaderData;
	const { t } = useTranslation("growers");
	const { values, problems } = actionData ?? {};
	const field = (name: (typeof fields)[number]) => ({
		name,
		defaultValue: values ? String(values[name] ?? "") : operation[name],
		problem: problems?.find((problem) => problem.field === name),
	});
	const labels = Object.fromEntries(fields.map((name) => [name, t(`edit.${name}`)]));
	return (
		<Page title={t("edit.title", { name: operation.name })}>
			<p className="no-print mb-4">
				<Link to={href("/desk/growers/:operationId", params)}>{t("edit.back")}</Link>
			</p>
			<ErrorSummary problems={problems} labels={labels} />
			<Form method="post" noValidate>
				<TextField {...field("name")} label={t("edit.name")} size="full" maxLength={200} />
				<TextField {...field("contactName")} label={t("edit.contactName")} size="full" maxLength={200} />
				<TextField {...field("phone")} label={t("edit.phone")} type="tel" maxLength={40} optional />
				<ChoiceField
					{...field("countyFips")}
					kind="select"
					legend={t("edit.countyFips")}
					help={t("edit.countyHelp")}
					options={counties.map(({ key, name, stateFips }) => ({
						value: key,
						label: name,
						group: t(`common:state.${stateFips}`),
					}))}
				/>
				<ChoiceField
					{...field("language")}
					kind="radio"
					legend={t("edit.language")}
					options={languages.map((value) => ({ value, label: t(`common:language.${value}`) }))}
				/>
				<ChoiceField
					{...field("massUnit")}
					kind="select"
					legend={t("edit.massUnit")}
					options={unitsFor("mass", 1).map((value) => ({ value, label: t(`grower:screen.unit.${value}`) }))}
				/>
				<Button>{t("edit.save")}</Button>
			</Form>
		</Page>
	);
}
