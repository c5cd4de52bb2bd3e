import { useTranslation } from "react-i18next";
import { data, Form, href, redirect, type RouterContextProvider } from "react-router";
import type { Route } from "./+types/planting";
import { requireOrchard } from "#app/auth/guard.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import { sessionContext } from "#app/auth/session.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { Button } from "#app/components/button.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Page } from "#app/components/page.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import {
	changePlanting,
	findOwnPlanting,
	type PlantingPlace,
	pullOutPlanting,
	splitPlanting,
} from "#app/directory/own-plantings.server.ts";
import { getLanguage } from "#app/i18n/middleware.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf } from "#app/lib/format.ts";
import { type FormValues, parseForm, type Problem } from "#app/lib/parse-form.ts";
import { refusal } from "#app/lib/refusal.ts";
import { todayIn } from "./parts/answering.server.ts";
import { BackToPlantings } from "./parts/back-to-orchard.tsx";
import { partOf, PlantingFields, plantingLabels } from "./parts/planting-fields.tsx";
import { plantingForm, type PlantingStep } from "./parts/planting-form.ts";
import { usePlantingName } from "./parts/planting-name.ts";

export async function loader({ context, params }: Route.LoaderArgs) {
	return getPlanting(context, params);
}

async function getPlanting(context: Readonly<RouterContextProvider>, place: PlantingPlace) {
	const grower = requireOrchard(context);
	const found = await grower.transaction((trx) => findOwnPlanting(trx, grower.viewer, place));
	if (!found) throw refusal("orchard_not_found");
	return { ...found, today: todayIn(found.operation.timeZone) };
}

export async function action({ context, params, request }: Route.ActionArgs) {
	const grower = requireOrchard(context);
	const { today } = await getPlanting(context, params);
	const form = parseForm(plantingForm(getLanguage(context), today), await request.formData());
	if (!form.ok) return data({ values: form.values, problems: form.problems }, { status: 400 });

	const { value: step } = form;
	const outcome = await grower.transaction((trx) => takeStep(trx, grower.viewer, params, step));
	if (outcome === "not_found") throw refusal("orchard_not_found");
	if (typeof outcome !== "string") return data({ values: form.values, problems: outcome.problems }, { status: 400 });
	context.get(sessionContext).flash("toast", { key: `orchard:plantings.toast.${outcome}` });
	return redirect(href("/orchard/:operationId/plantings", { operationId: params.operationId }), 303);
}

async function takeStep(trx: Trx, viewer: Grower, place: PlantingPlace, step: PlantingStep) {
	switch (step.step) {
		case "change":
			return changePlanting(trx, viewer, place, step.whole);
		case "split":
			return splitPlanting(trx, viewer, place, [step.first, step.second]);
		case "pull_out":
			return pullOutPlanting(trx, viewer, place, step.removedOn);
	}
}

type PartProps = Route.ComponentProps["loaderData"] & { values?: FormValues; problems?: Problem[] };

export default function PlantingPage({ loaderData, actionData, params }: Route.ComponentProps) {
	const { t } = useTranslation("orchard");
	const name = usePlantingName()(loaderData.planting);
	const step = actionData?.values.step;
	/** Only the form that was sent shows what it sent. */
	const part = (of: PlantingStep["step"]): PartProps => ({ ...loaderData, ...(step === of ? actionData : {}) });
	return (
		<Page title={name} lead={loaderData.operation.name}>
			<BackToPlantings operationId={params.operationId} />
			<ErrorSummary
				problems={actionData?.problems}
				labels={{
					...plantingLabels(t, ["whole.", "first.", "second."]),
					removedOn: t("plantings.field.removedOn"),
				}}
			/>
			<Change {...part("change")} />
			<Split {...part("split")} />
			<PullOut {...part("pull_out")} />
		</Page>
	);
}

function Change({ planting, values, problems }: PartProps) {
	const { t } = useTranslation("orchard");
	const { plantedYear } = planting;
	return (
		<Section title={t("plantings.changeTitle")}>
			<Form method="post" noValidate>
				<PlantingFields
					prefix="whole."
					defaults={{ ...planting, plantedYear: plantedYear && String(plantedYear) }}
					sent={partOf(values, "whole")}
					problems={problems}
				/>
				<Button name="step" value="change">
					{t("plantings.save")}
				</Button>
			</Form>
		</Section>
	);
}

function Split({ planting, values, problems }: PartProps) {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const { bearingTrees, youngTrees, areaAcres, plantedYear, cultivar } = planting;
	const defaults = { cultivar, plantedYear: plantedYear && String(plantedYear) };
	const whole = [
		t("plantings.bearing", { count: bearingTrees, value: format.number(bearingTrees) }),
		t("plantings.young", { count: youngTrees, value: format.number(youngTrees) }),
		...(areaAcres === null ? [] : [format.quantity(areaAcres, "acres", decimalsOf(areaAcres))]),
	];
	return (
		<Section title={t("plantings.splitTitle")}>
			<p className="mb-4">{t("plantings.splitLead", { whole: format.list(whole) })}</p>
			<Form method="post" noValidate>
				{(["first", "second"] as const).map((name) => (
					<fieldset key={name} className="mb-6 border border-rule px-5 pt-4">
						<legend className="px-1 font-bold">{t(`plantings.part.${name}`)}</legend>
						<PlantingFields prefix={`${name}.`} defaults={defaults} sent={partOf(values, name)} problems={problems} />
					</fieldset>
				))}
				<Button kind="secondary" name="step" value="split">
					{t("plantings.split")}
				</Button>
			</Form>
		</Section>
	);
}

function PullOut({ today, values, problems }: PartProps) {
	const { t } = useTranslation("orchard");
	const sent = values?.removedOn;
	return (
		<Section title={t("plantings.pullOutTitle")}>
			<p className="mb-4">{t("plantings.pullOutLead")}</p>
			<Form method="post" noValidate>
				<TextField
					type="date"
					name="removedOn"
					label={t("plantings.field.removedOn")}
					defaultValue={values ? (typeof sent === "string" ? sent : "") : today}
					problem={problems?.find(({ field }) => field === "removedOn")}
				/>
				<Button kind="secondary" name="step" value="pull_out">
					{t("plantings.pullOut")}
				</Button>
			</Form>
		</Section>
	);
}
