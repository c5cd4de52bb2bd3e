import { useTranslation } from "react-i18next";
import { Form } from "react-router";
import type { Survey } from "#app/collect/surveys.server.ts";
import { Button } from "#app/components/button.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FormValues, Problem } from "#app/lib/parse-form.ts";
import { clockWords } from "./clock-words.ts";

type ClosingPartProps = {
	/** The closing time as it stands, on the clock of the survey's zone. */
	closing: { on: string; at: string };
	survey: Survey;
	values?: FormValues;
	problems?: Problem[];
};

export function closingLabels(t: (key: string) => string): Record<string, string> {
	return { closesOn: t("surveyNew.closesOn"), closesAt: t("surveyNew.closesAt") };
}

/** Moves the closing time, so that late growers can still answer. */
export function ClosingPart({ closing, survey, values, problems }: ClosingPartProps) {
	const { t } = useTranslation("desk");
	const format = useFormat();
	const labels = closingLabels(t);
	// Another step's answer brings no closing time along.
	const sent = values?.step === "extend" ? values : undefined;
	const field = (name: "closesOn" | "closesAt", standing: string) => ({
		name,
		label: labels[name]!,
		defaultValue: sent ? String(sent[name] ?? "") : standing,
		problem: problems?.find((problem) => problem.field === name),
	});
	return (
		<Section title={t("survey.extend.title")}>
			<Form key={`${closing.on} ${closing.at}`} method="post" noValidate>
				<p className="mb-4 max-w-prose">{t("survey.extend.body")}</p>
				<div className="flex flex-wrap items-end gap-x-8">
					<TextField {...field("closesOn", closing.on)} type="date" size="medium" />
					<TextField
						{...field("closesAt", closing.at)}
						type="time"
						size="short"
						help={clockWords(survey, { t, format })}
					/>
				</div>
				<Button name="step" value="extend" kind="secondary">
					{t("survey.extend.button")}
				</Button>
			</Form>
		</Section>
	);
}
