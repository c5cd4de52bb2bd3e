import { data, href, redirect, type RouterContextProvider } from "react-router";
import type { Route } from "./+types/planting";
import { requireAssociate } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { listFrozenFrames } from "#app/collect/frozen-frames.server.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { findPlanting, type PlantingPlace } from "#app/directory/plantings.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { todayIn } from "../grower/parts/answering.server.ts";
import { plantingForm } from "../grower/parts/planting-form.ts";
import { usePlantingName } from "../grower/parts/planting-name.ts";
import { PlantingSteps, usePlantingLabels } from "../grower/parts/planting-steps.tsx";
import { takePlantingStep } from "../grower/parts/take-planting-step.server.ts";
import { BackToGrower } from "./parts/growers/back-to-grower.tsx";
import { FrozenFrames } from "./parts/growers/frozen-frames.tsx";

export async function loader({ context, params }: Route.LoaderArgs) {
	return getPlanting(context, params);
}

async function getPlanting(context: Readonly<RouterContextProvider>, place: PlantingPlace) {
	const desk = requireAssociate(context);
	const found = await desk.transaction(async (trx) => {
		const one = await findPlanting(trx, desk.viewer, place);
		return one && { ...one, frames: await listFrozenFrames(trx, desk.viewer, place.operationId) };
	});
	if (!found) throw refusal("operation_not_found");
	return { ...found, today: todayIn(found.operation.timeZone) };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const desk = requireAssociate(context);
	const { today } = await getPlanting(context, params);
	const form = parseForm(plantingForm(getLanguage(context), today), await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });
	const { value: step } = form;
	const outcome = await desk.transaction((trx) => takePlantingStep(trx, desk.viewer, params, step));
	if (outcome === "not_found") throw refusal("operation_not_found");
	if (typeof outcome !== "string") return data({ values: form.values, problems: outcome.problems }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: `growers:planting.toast.${outcome}` });
	return redirect(href("/desk/growers/:operationId", { operationId: params.operationId }), 303);
}

export default function PlantingPage({ loaderData, actionData, params }: Route.ComponentProps) {
	const { operation, planting, today, frames } = loaderData;
	const name = usePlantingName()(planting);
	return (
		<Page title={name} lead={operation.name}>
			<BackToGrower operationId={params.operationId} />
			<ErrorSummary problems={actionData?.problems} labels={usePlantingLabels()} />
			<FrozenFrames frames={frames} />
			<PlantingSteps planting={planting} today={today} {...actionData} />
		</Page>
	);
}
