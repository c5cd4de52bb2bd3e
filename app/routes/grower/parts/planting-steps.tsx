import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { Planting } from "#app/directory/plantings.server.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf } from "#app/lib/format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { partOf, PlantingFields, plantingLabels } from "./planting-fields.tsx";
import type { PlantingStep } from "./planting-form.ts";

type PartProps = { planting: Planting; today: string; values?: FormValues; problems?: Problem[] };

/** What the fields of all steps are called where one of them is to be mended. */
export function usePlantingLabels(): Record<string, string> {
	const { t } = useTranslation("orchard");
	return { ...plantingLabels(t, ["whole.", "first.", "second."]), removedOn: t("plantings.field.removedOn") };
}

/** Everything that can be done with one planting, for its grower and at the desk. */
export function PlantingSteps({ planting, today, values, problems }: PartProps) {
	/** Only the form that was sent shows what it sent. */
	const part = (of: PlantingStep["step"]): PartProps =>
		values?.step === of ? { planting, today, values, problems } : { planting, today };
	return (
		<>
			<Change {...part("change")} />
			<Split {...part("split")} />
			<PullOut {...part("pull_out")} />
		</>
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
