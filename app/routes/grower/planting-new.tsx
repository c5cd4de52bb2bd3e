import { useTranslation } from "react-i18next";
import { data, href, redirect } from "react-router";
import type { Route } from "./+types/planting-new";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Page } from "#app/components/page.tsx";
import { addPlanting } from "#app/directory/plantings.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BackToPlantings } from "./parts/back-to-orchard.tsx";
import { getOwnOperation } from "./parts/own-operation.server.ts";
import { NewPlantingForm } from "./parts/new-planting-form.tsx";
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
	return (
		<Page title={t("plantings.addTitle")} lead={t("plantings.addLead", { operation: loaderData.operation.name })}>
			<BackToPlantings operationId={params.operationId} />
			<NewPlantingForm {...actionData} />
		</Page>
	);
}
