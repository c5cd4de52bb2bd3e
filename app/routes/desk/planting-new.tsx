import { useTranslation } from "react-i18next";
import { data, href, redirect, type RouterContextProvider } from "react-router";
import type { Route } from "./+types/planting-new";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { listFrozenFrames } from "#app/collect/frozen-frames.server.ts";
import { Page } from "#app/components/page.tsx";
import { addPlanting, listPlantings } from "#app/directory/plantings.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { todayIn } from "../grower/parts/answering.server.ts";
import { NewPlantingForm } from "../grower/parts/new-planting-form.tsx";
import { newPlantingForm } from "../grower/parts/planting-form.ts";
import { BackToGrower } from "./parts/growers/back-to-grower.tsx";
import { FrozenFrames } from "./parts/growers/frozen-frames.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	return getOperation(context, params.operationId);
}

async function getOperation(context: Readonly<RouterContextProvider>, operationId: string) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const all = await listPlantings(trx, desk.viewer, operationId);
		return all && { operation: all.operation, frames: await listFrozenFrames(trx, desk.viewer, operationId) };
	});
	if (!found) throw refusal("operation_not_found");
	return found;
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const { operation } = await getOperation(context, params.operationId);
	const thisYear = Number(todayIn(operation.timeZone).slice(0, 4));
	const form = parseForm(newPlantingForm(getLanguage(context), thisYear), await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const outcome = await desk.transaction((trx) => addPlanting(trx, desk.viewer, params.operationId, form.value));
	if (outcome === "not_found") throw refusal("operation_not_found");
	context.get(sessionContext).flash("toast", { key: "growers:planting.toast.added" });
	return redirect(href("/desk/growers/:operationId", params), 303);
}

export default function PlantingNew({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	const { operation, frames } = loaderData;
	return (
		<Page title={t("plantings.addTitle")} lead={t("plantings.addLead", { operation: operation.name })}>
			<BackToGrower operationId={params.operationId} />
			<FrozenFrames frames={frames} />
			<NewPlantingForm {...actionData} />
		</Page>
	);
}
