import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import { unitsFor } from "#app/collect/units.ts";
import { Button } from "#app/components/button.tsx";
import { ChoiceField, type Option } from "#app/components/choice-field.tsx";
import { ErrorSummary } from "#app/components/error-summary.tsx";
import { Section } from "#app/components/section.tsx";
import { type Columns, type ImportChoices, type ImportField, importFields } from "#app/directory/import/columns.ts";
import { languages } from "#app/i18n/language.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import type { ColumnSample } from "./sample-columns.server.ts";

type ColumnsFormProps = {
	columns: { samples: ColumnSample[]; guessed: Columns };
	choices: ImportChoices | null;
	values?: FormValues;
	problems?: Problem[];
};

const needed = new Set<ImportField>(["name", "county"]);
const settings = ["written", "language", "areaUnit", "massUnit"] as const;

/** Which column holds what, guessed from its heading, and what goes for all rows. */
export function ColumnsForm({ columns, choices, values, problems }: ColumnsFormProps) {
	const { t, i18n } = useTranslation("growers");
	const standing = choices?.columns ?? columns.guessed;
	const sent = values?.columns as Record<string, unknown> | undefined;
	const problemOf = (field: string) => problems?.find((problem) => problem.field === field);
	const nameOf = ({ heading, sample }: ColumnSample, index: number) =>
		t("import.column", {
			number: index + 1,
			heading: heading || t("import.noHeading"),
			sample: sample || t("import.noSample"),
		});
	const options: Option[] = [
		{ value: "", label: t("import.noColumn") },
		...columns.samples.map((column, index) => ({ value: String(index), label: nameOf(column, index) })),
	];
	const settingOptions: Record<(typeof settings)[number], Option[]> = {
		written: languages.map((value) => ({ value, label: t(`import.writtenIn.${value}`) })),
		language: languages.map((value) => ({ value, label: t(`common:language.${value}`) })),
		areaUnit: (["acre", "ha"] as const).map((value) => ({ value, label: t(`grower:screen.unit.${value}`) })),
		massUnit: unitsFor("mass", 1).map((value) => ({ value, label: t(`grower:screen.unit.${value}`) })),
	};
	// Spanish speakers in the states write 1,250.5 too.
	const plain = { written: "en", language: i18n.language, areaUnit: "acre", massUnit: "lb" };
	const labels = Object.fromEntries([
		...importFields.map((field) => [`columns.${field}`, t(`import.field.${field}`)]),
		...settings.map((name) => [name, t(`import.setting.${name}`)]),
	]);
	return (
		<Form method="post" noValidate>
			<ErrorSummary problems={problems} labels={labels} />
			<Section title={t("import.columnsTitle")}>
				<p className="mb-4 max-w-prose">{t("import.columnsBody")}</p>
				<div className="grid gap-x-8 lg:grid-cols-2">
					{importFields.map((field) => (
						<ChoiceField
							key={field}
							kind="select"
							name={`columns.${field}`}
							legend={t(`import.field.${field}`)}
							optional={!needed.has(field)}
							options={options}
							defaultValue={sent ? String(sent[field] ?? "") : String(standing[field] ?? "")}
							problem={problemOf(`columns.${field}`)}
						/>
					))}
				</div>
			</Section>
			<Section title={t("import.settingsTitle")}>
				{settings.map((name) => (
					<ChoiceField
						key={name}
						kind="select"
						name={name}
						legend={t(`import.setting.${name}`)}
						help={t(`import.settingHelp.${name}`)}
						options={settingOptions[name]}
						defaultValue={values ? String(values[name] ?? "") : (choices?.[name] ?? plain[name])}
						problem={problemOf(name)}
					/>
				))}
			</Section>
			<Button name="step" value="check">
				{t("import.check")}
			</Button>
		</Form>
	);
}
