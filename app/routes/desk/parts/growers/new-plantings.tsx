import { useTranslation } from "react-i18next";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Section } from "#app/components/section.tsx";
import { cropKeys } from "#app/directory/crops.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { PlantingFields, plantingLabels } from "../../../grower/parts/planting-fields.tsx";

const prefixOf = (row: number) => `plantings[${row}].`;

/** What the boxes of so many new plantings are called where one of them is to be mended. */
export function useNewPlantingLabels(rows: number): Record<string, string> {
	const { t } = useTranslation("orchard");
	const prefixes = Array.from({ length: rows }, (_, row) => prefixOf(row));
	const crops = prefixes.map((prefix) => [`${prefix}cropKey`, t("plantings.field.cropKey")]);
	return { ...plantingLabels(t, prefixes), ...Object.fromEntries(crops) };
}

type NewPlantingsProps = { rows: number; values?: FormValues; problems?: Problem[] };

/** The plantings of a grower who is written down; a row left blank is none. */
export function NewPlantings({ rows, values, problems }: NewPlantingsProps) {
	const { t } = useTranslation("growers");
	const sent = Array.isArray(values?.plantings) ? (values.plantings as (FormValues | undefined)[]) : [];
	return (
		<Section title={t("desk:grower.plantings")}>
			<p className="mb-4 max-w-prose">{t("new.plantingsLead")}</p>
			{Array.from({ length: rows }, (_, row) => (
				<fieldset key={row} className="mb-6 border border-rule px-5 pt-4">
					<legend className="px-1 font-bold">{t("new.planting", { number: row + 1 })}</legend>
					<ChoiceField
						kind="select"
						name={`${prefixOf(row)}cropKey`}
						legend={t("orchard:plantings.field.cropKey")}
						options={[
							{ value: "", label: t("edit.choose") },
							...cropKeys.map((key) => ({ value: key, label: t(`common:crop.${key}`) })),
						]}
						defaultValue={String(sent[row]?.cropKey ?? "")}
						problem={problems?.find(({ field }) => field === `${prefixOf(row)}cropKey`)}
					/>
					<PlantingFields prefix={prefixOf(row)} sent={sent[row] ?? {}} problems={problems} />
				</fieldset>
			))}
		</Section>
	);
}
