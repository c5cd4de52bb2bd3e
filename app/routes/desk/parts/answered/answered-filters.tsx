import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { type AnsweredQuery, answeredParts, weighings } from "#app/collect/answered.schema.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";

/** Of which crop, by which parts and weighed how; sent by GET so that a link keeps it. */
export function AnsweredFilters({ query, crops }: { query: AnsweredQuery; crops: string[] }) {
	const { t } = useTranslation("answered");
	return (
		<Form method="get" className="mb-5 flex flex-wrap items-end gap-x-4 gap-y-3 *:mb-0 *:max-w-full">
			<ChoiceField
				kind="select"
				name="by"
				legend={t("rates.by")}
				defaultValue={query.by}
				options={answeredParts.map((part) => ({ value: part, label: t(`rates.parts.${part}`) }))}
			/>
			<ChoiceField
				kind="select"
				name="weigh"
				legend={t("rates.weigh")}
				defaultValue={query.weigh}
				options={weighings.map((weighing) => ({ value: weighing, label: t(`rates.weighings.${weighing}`) }))}
			/>
			<ChoiceField
				kind="select"
				name="crop"
				legend={t("rates.crop")}
				defaultValue={query.crop}
				options={["all", ...crops].map((crop) => ({ value: crop, label: t(`common:crop.${crop}`) }))}
			/>
			<Button kind="secondary">{t("rates.show")}</Button>
		</Form>
	);
}
