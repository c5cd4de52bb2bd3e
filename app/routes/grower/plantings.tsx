import { useTranslation } from "react-i18next";
import { Form, href, Link, redirect } from "react-router";
import { z } from "zod";
import type { Route } from "./+types/plantings";
import { requireOrchard } from "#app/auth/guard.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import { Button, ButtonLink } from "#app/components/button.tsx";
import { EmptyState } from "#app/components/empty-state.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { listPlantings, putBackPlanting } from "#app/directory/plantings.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf } from "#app/lib/format.ts";
import { parseForm } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { BackToOrchard } from "./parts/back-to-orchard.tsx";
import { usePlantingName } from "./parts/planting-name.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	const grower = requireOrchard(context);
	const found = await grower.transaction((trx) => listPlantings(trx, grower.viewer, params.operationId));
	if (!found) throw refusal("orchard_not_found");
	return found;
}

const PutBackForm = z.object({ plantingId: z.guid() });

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const form = parseForm(PutBackForm, await request.formData());
	if (!form.ok) throw refusal("form_not_understood");
	const place = { operationId: params.operationId, plantingId: form.value.plantingId };
	const outcome = await grower.transaction((trx) => putBackPlanting(trx, grower.viewer, place));
	if (outcome === "not_found") throw refusal("orchard_not_found");
	context.get(sessionContext).flash("toast", { key: "orchard:plantings.toast.put_back" });
	return redirect(href("/orchard/:operationId/plantings", params), 303);
}

type Planting = Route.ComponentProps["loaderData"]["plantings"][number];

export default function Plantings({ loaderData, params }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	const { operation, plantings } = loaderData;
	const standing = plantings.filter(({ removedOn }) => removedOn === null);
	const pulledOut = plantings.filter(({ removedOn }) => removedOn !== null);
	const add = (
		<ButtonLink kind="secondary" to={href("/orchard/:operationId/plantings/new", params)}>
			{t("plantings.add")}
		</ButtonLink>
	);
	return (
		<Page title={t("plantings.title")} lead={t("plantings.lead", { operation: operation.name })}>
			<BackToOrchard />
			{standing.length === 0 ? (
				<EmptyState title={t("plantings.noneTitle")} action={add}>
					{t("plantings.noneBody")}
				</EmptyState>
			) : (
				<>
					<ul className="mb-6 border-t border-rule">
						{standing.map((planting) => (
							<Standing key={planting.plantingId} planting={planting} operationId={params.operationId} />
						))}
					</ul>
					{add}
				</>
			)}
			{pulledOut.length > 0 && (
				<Section title={t("plantings.pulledOut")}>
					<p className="mb-4">{t("plantings.pulledOutLead")}</p>
					<ul className="border-t border-rule">
						{pulledOut.map((planting) => (
							<PulledOut key={planting.plantingId} planting={planting} />
						))}
					</ul>
				</Section>
			)}
		</Page>
	);
}

function Standing({ planting, operationId }: { planting: Planting; operationId: string }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const name = usePlantingName()(planting);
	const { plantingId, bearingTrees, youngTrees, areaAcres, plantedYear } = planting;
	const count = (trees: number) => ({ count: trees, value: format.number(trees) });
	const facts = [
		t("plantings.bearing", count(bearingTrees)),
		youngTrees > 0 && t("plantings.young", count(youngTrees)),
		areaAcres !== null && format.quantity(areaAcres, "acres", Math.min(2, decimalsOf(areaAcres))),
		plantedYear !== null && t("plantings.planted", { year: plantedYear }),
	].filter((fact) => typeof fact === "string");
	return (
		<li className="flex flex-wrap items-center justify-between gap-x-6 border-b border-rule py-3">
			<div className="min-w-0 wrap-anywhere">
				<p className="font-bold">{name}</p>
				<p className="text-base text-quiet">{facts.join(" · ")}</p>
			</div>
			<Link
				to={href("/orchard/:operationId/plantings/:plantingId", { operationId, plantingId })}
				aria-label={t("plantings.changeOf", { planting: name })}
				className="inline-flex min-h-11 items-center"
			>
				{t("plantings.change")}
			</Link>
		</li>
	);
}

function PulledOut({ planting }: { planting: Planting }) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const name = usePlantingName()(planting);
	return (
		<li className="flex flex-wrap items-center justify-between gap-x-6 gap-y-2 border-b border-rule py-3">
			<div className="min-w-0 wrap-anywhere">
				<p className="font-bold">{name}</p>
				<p className="text-base text-quiet">
					{planting.removedOn && t("plantings.pulledOutOn", { day: format.day(planting.removedOn) })}
				</p>
			</div>
			<Form method="post">
				<input type="hidden" name="plantingId" value={planting.plantingId} />
				<Button kind="secondary" aria-label={t("plantings.putBackOf", { planting: name })}>
					{t("plantings.putBack")}
				</Button>
			</Form>
		</li>
	);
}
