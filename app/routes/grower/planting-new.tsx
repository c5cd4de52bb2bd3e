import { useTranslation } from "react-i18next";
import { data, Form, href, redirect } from "react-router";
import type { Route } from "./+types/planting-new";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { cropKeys } from "#app/directory/crops.ts";
import { addPlanting } from "#app/directory/own-plantings.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BackToPlantings } from "./parts/back-to-orchard.tsx";
import { getOwnOperation } from "./parts/own-operation.server.ts";
import { PlantingFields, plantingLabels } from "./parts/planting-fields.tsx";
import { newPlantingForm } from "./parts/planting-form.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	return { operation: await getOwnOperation(context, params.operationId) };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const { today } = await getOwnOperation(context, params.operationId);
	const form = parseForm(newPlantingForm(getLanguage(context), Number(today.slice(0, 4))), await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const outcome = await grower.transaction((trx) => addPlanting(trx, grower.viewer, params.operationId, form.value));
	if (outcome === "not_found") throw refusal("orchard_not_found");
	context.get(sessionContext).flash("toast", { key: "orchard:plantings.toast.added" });
	return redirect(href("/orchard/:operationId/plantings", params), 303);
}

export default function PlantingNew({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	const { values, problems } = actionData ?? {};
	const crop = values?.cropKey;
	return (
		<Page title={t("plantings.addTitle")} lead={t("plantings.addLead", { operation: loaderData.operation.name })}>
			<BackToPlantings operationId={params.operationId} />
			<ErrorSummary problems={problems} labels={{ cropKey: t("plantings.field.cropKey"), ...plantingLabels(t) }} />
			<Form method="post" noValidate>
				<ChoiceField
					kind="radio"
					name="cropKey"
					legend={t("plantings.field.cropKey")}
					help={t("plantings.help.cropKey")}
					options={cropKeys.map((key) => ({ value: key, label: t(`common:crop.${key}`) }))}
					defaultValue={typeof crop === "string" ? crop : null}
					problem={problems?.find(({ field }) => field === "cropKey")}
				/>
				<PlantingFields sent={values} problems={problems} />
				<Button>{t("plantings.addButton")}</Button>
			</Form>
		</Page>
	);
}
