import { useTranslation } from "react-i18next";
import type { Question } from "#app/collect/form.ts";
import { postedText, type StepValues } from "#app/collect/posted.ts";
import { entryName } from "#app/collect/read-entry.ts";
import type { Step } from "#app/collect/steps.ts";
import { unitFamilyOf } from "#app/collect/units.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { CrateBox } from "../../../grower/parts/crate-box.tsx";
import { labelOf, UnitOf } from "../../../grower/parts/question-field.tsx";

type EntryFieldProps = { step: Step; question: Question; values: StepValues; problems: Problem[] };

/** One question, named as on the grower's screen behind the key of its step. */
export function EntryField({ step, question, values, problems }: EntryFieldProps) {
	const { t, i18n } = useTranslation("answered");
	const name = entryName(step.key, question.key);
	const label = wordsIn(question.text, i18n.language);
	const shared = {
		name,
		noun: labelOf(question, i18n.language),
		optional: !question.required,
		problem: problems.find(({ field }) => field === name),
	};
	switch (question.type) {
		case "photo":
			return null;
		case "several":
			return (
				<ChoiceField
					{...shared}
					kind="checkbox"
					legend={label}
					options={optionsOf(question, i18n.language, t)}
					defaultValue={values[name]}
				/>
			);
		case "choice":
		case "rating":
			return (
				<ChoiceField
					{...shared}
					kind="select"
					legend={label}
					options={[{ value: "", label: t("rates.absent") }, ...optionsOf(question, i18n.language, t)]}
					defaultValue={values[name]}
				/>
			);
		case "date":
			return (
				<TextField
					{...shared}
					label={label}
					type="date"
					defaultValue={postedText(values, name)}
					suffix={<SilenceOf name={`${name}_kind`} label={shared.noun} value={postedText(values, `${name}_kind`)} />}
				/>
			);
		default: {
			const crate = `${name}_crate`;
			return (
				<TextField
					{...shared}
					label={label}
					inputMode={question.type === "number" || question.type === "percent" ? "decimal" : undefined}
					size={question.type === "number" || question.type === "percent" ? "short" : "full"}
					autoComplete="off"
					defaultValue={postedText(values, name)}
					suffix={
						<UnitOf question={{ ...question, key: name }} planting={step.planting} values={values} label={label} />
					}
					below={
						unitFamilyOf(question) === "mass" && (
							<CrateBox
								name={crate}
								question={label}
								value={values[crate]}
								problem={problems.find(({ field }) => field === crate)}
							/>
						)
					}
				/>
			);
		}
	}
}

type Options = Extract<Question, { options: unknown }>;

/** The form's own options, and the two silences among them. */
function optionsOf(
	{ options }: Options,
	language: string,
	t: (key: "grower:unknown.dont_know" | "grower:unknown.refused") => string,
) {
	return [
		...options.map(({ key, text }) => ({ value: key, label: wordsIn(text, language) })),
		{ value: "_dont_know", label: t("grower:unknown.dont_know") },
		{ value: "_refused", label: t("grower:unknown.refused") },
	];
}

/** A day's box takes no sign, so that the two silences stand beside it. */
function SilenceOf({ name, label, value }: { name: string; label: string; value: string }) {
	const { t } = useTranslation("answered");
	return (
		<select
			name={name}
			aria-label={t("grower:unknown.about", { question: label })}
			defaultValue={value}
			className="min-h-11 max-w-40 rounded-plat border border-field bg-paper px-3 py-2 text-ink"
		>
			<option value="">{t("rates.absent")}</option>
			<option value="dont_know">{t("grower:unknown.dont_know")}</option>
			<option value="refused">{t("grower:unknown.refused")}</option>
		</select>
	);
}
