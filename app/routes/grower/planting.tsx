import { data, href, redirect, type RouterContextProvider } from "react-router";
import type { Route } from "./+types/planting";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { findPlanting, type PlantingPlace } from "#app/directory/plantings.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { todayIn } from "./parts/answering.server.ts";
import { BackToPlantings } from "./parts/back-to-orchard.tsx";
import { plantingForm } from "./parts/planting-form.ts";
import { usePlantingName } from "./parts/planting-name.ts";
import { PlantingSteps, usePlantingLabels } from "./parts/planting-steps.tsx";
import { takePlantingStep } from "./parts/take-planting-step.server.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	return getPlanting(context, params);
}

async function getPlanting(context: Readonly<RouterContextProvider>, place: PlantingPlace) {
	const grower = requireOrchard(context);
	const found = await grower.transaction((trx) => findPlanting(trx, grower.viewer, place));
	if (!found) throw refusal("orchard_not_found");
	return { ...found, today: todayIn(found.operation.timeZone) };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const { today } = await getPlanting(context, params);
	const form = parseForm(plantingForm(getLanguage(context), today), await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const { value: step } = form;
	const outcome = await grower.transaction((trx) => takePlantingStep(trx, grower.viewer, params, step));
	if (outcome === "not_found") throw refusal("orchard_not_found");
	if (typeof outcome !== "string") return data({ values: form.values, problems: outcome.problems }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: `orchard:plantings.toast.${outcome}` });
	return redirect(href("/orchard/:operationId/plantings", { operationId: params.operationId }), 303);
}

export default function PlantingPage({ loaderData, actionData, params }: Route.ComponentProps) {
	const { operation, planting, today } = loaderData;
	const name = usePlantingName()(planting);
	return (
		<Page title={name} lead={operation.name}>
			<BackToPlantings operationId={params.operationId} />
			<ErrorSummary problems={actionData?.problems} labels={usePlantingLabels()} />
			<PlantingSteps planting={planting} today={today} {...actionData} />
		</Page>
	);
}
