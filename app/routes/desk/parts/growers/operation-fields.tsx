import { useTranslation } from "react-i18next";
import { unitsFor } from "#app/collect/units.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { Area } from "#app/directory/areas.server.ts";
import { languages } from "#app/i18n/language.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";

const fields = ["name", "contactName", "phone", "countyFips", "language", "massUnit"] as const;
type Field = (typeof fields)[number];

/** What the fields of an operation are called where one of them is to be mended. */
export function useOperationLabels(): Record<Field, string> {
	const { t } = useTranslation("growers");
	return Object.fromEntries(fields.map((name) => [name, t(`edit.${name}`)])) as Record<Field, string>;
}

type OperationFieldsProps = {
	counties: Pick<Area, "key" | "name" | "stateFips">[];
	/** What stands in the boxes before anything was sent. */
	defaults: Partial<Record<Field, string | null>>;
	values?: FormValues;
	problems?: Problem[];
	countyHelp?: string;
};

/** What is written down of an operation, the same for a new one and for one that is changed. */
export function OperationFields({ counties, defaults, values, problems, countyHelp }: OperationFieldsProps) {
	const { t } = useTranslation("growers");
	const labels = useOperationLabels();
	const field = (name: Field) => ({
		name,
		defaultValue: values ? String(values[name] ?? "") : (defaults[name] ?? ""),
		problem: problems?.find((problem) => problem.field === name),
	});
	return (
		<>
			<TextField {...field("name")} label={labels.name} size="full" maxLength={200} />
			<TextField {...field("contactName")} label={labels.contactName} size="full" maxLength={200} />
			<TextField {...field("phone")} label={labels.phone} type="tel" maxLength={40} optional />
			<ChoiceField
				{...field("countyFips")}
				kind="select"
				legend={labels.countyFips}
				help={countyHelp}
				options={[
					...(defaults.countyFips ? [] : [{ value: "", label: t("edit.choose") }]),
					...counties.map(({ key, name, stateFips }) => ({
						value: key,
						label: name,
						group: t(`common:state.${stateFips}`),
					})),
				]}
			/>
			<ChoiceField
				{...field("language")}
				kind="radio"
				legend={labels.language}
				options={languages.map((value) => ({ value, label: t(`common:language.${value}`) }))}
			/>
			<ChoiceField
				{...field("massUnit")}
				kind="select"
				legend={labels.massUnit}
				options={unitsFor("mass", 1).map((value) => ({ value, label: t(`grower:screen.unit.${value}`) }))}
			/>
		</>
	);
}
