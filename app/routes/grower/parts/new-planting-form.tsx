import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { cropKeys } from "#app/directory/crops.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { PlantingFields, plantingLabels } from "./planting-fields.tsx";

/** One more planting of an operation, for its grower and at the desk. */
export function NewPlantingForm({ values, problems }: { values?: FormValues; problems?: Problem[] }) {
	const { t } = useTranslation("orchard");
	const crop = values?.cropKey;
	return (
		<>
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
		</>
	);
}
