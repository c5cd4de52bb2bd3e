import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { SurveyDraft } from "#app/collect/survey-draft.schema.ts";
import type { StateClock } from "#app/collect/surveys.server.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { cropKeys } from "#app/directory/crops.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { clockOfChosenWords } from "./clock-words.ts";

type SurveyFieldsProps = {
	/** States that can be chosen. */
	stateFips: string[];
	clocks: StateClock[];
	/** What stands in the boxes: a draft as it is, or what was typed. */
	values: FormValues;
	problems: Problem[] | undefined;
};

/** What a draft is called, of whom it asks, and until when. */
export function SurveyFields({ stateFips, clocks, values, problems }: SurveyFieldsProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const chosen = (name: string) => [values[name] ?? []].flat().map(String);
	const problemOf = (field: string) => problems?.find((problem) => problem.field === field);
	const text = (name: "titleEn" | "titleEs" | "season" | "closesOn" | "closesAt") => ({
		name,
		label: t(`surveyNew.${name}`),
		defaultValue: String(values[name] ?? ""),
		problem: problemOf(name),
	});
	return (
		<>
			<TextField {...text("season")} inputMode="numeric" size="short" maxLength={4} />
			<TextField {...text("titleEn")} maxLength={120} help={t("surveyNew.titleHelp")} optional />
			<TextField {...text("titleEs")} maxLength={120} help={t("surveyNew.titleHelp")} optional />
			<ChoiceField
				kind="checkbox"
				name="crops"
				legend={t("surveyNew.crops")}
				options={cropKeys.map((key) => ({ value: key, label: t(`common:crop.${key}`) }))}
				defaultValue={chosen("crops")}
				problem={problemOf("crops")}
			/>
			<ChoiceField
				kind="checkbox"
				name="states"
				legend={t("surveyNew.states")}
				options={stateFips.map((key) => ({ value: key, label: t(`common:state.${key}`) }))}
				defaultValue={chosen("states")}
				problem={problemOf("states")}
			/>
			<TextField {...text("closesOn")} type="date" size="medium" />
			<TextField {...text("closesAt")} type="time" size="short" help={clockOfChosenWords(clocks, { t, format })} />
		</>
	);
}

/** What each field is called where its problem is told. */
export function surveyFieldLabels(t: TFunction<"desk">): Record<string, string> {
	return Object.fromEntries(SurveyDraft.keyof().options.map((field) => [field, t(`surveyNew.${field}`)]));
}
