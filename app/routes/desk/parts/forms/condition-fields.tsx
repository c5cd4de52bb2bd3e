import { useTranslation } from "react-i18next";
import { comparisons, type ConditionLines, type Line, mostLines } from "#app/collect/editing/condition-lines.ts";
import type { FormDraft } from "#app/collect/editing/draft.ts";
import type { Question } from "#app/collect/form.ts";
import { CheckField } from "#app/components/check-field.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Notice } from "#app/components/notice.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { Condition } from "#app/lib/condition.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { useConditionWords, useFormWords, wordOf } from "./condition-words.ts";

type ConditionFieldsProps = {
	/** Of the fields: `condition` or `when`. */
	name: string;
	value: ConditionLines;
	/** As it is kept now, for one that lines cannot say. */
	kept: Condition | undefined;
	draft: FormDraft;
	offered: Question[];
	problems?: Problem[];
	/** Whether it is asked what to do while answers do not decide it. */
	asksWhenUnsure?: boolean;
};

/** A condition, line by line; one line more than there are stands ready. */
export function ConditionFields(props: ConditionFieldsProps) {
	const { name, value, kept, draft, offered, problems, asksWhenUnsure } = props;
	const { t } = useTranslation("forms");
	const inWords = useConditionWords(draft);
	if (value.keep && kept) {
		return (
			<>
				<Notice tone="info">{t("condition.complex", { condition: inWords(kept) })}</Notice>
				<CheckField name={`${name}.keep`} label={t("condition.keep")} defaultChecked />
			</>
		);
	}
	if (offered.length === 0) return <p className="mb-6 text-quiet">{t("condition.nothingBefore")}</p>;
	const shown = Math.min(mostLines, Math.max(value.lines.length + 1, 2));
	return (
		<>
			<ChoiceField
				kind="select"
				name={`${name}.join`}
				legend={t("condition.join.legend")}
				options={(["all", "any"] as const).map((join) => ({ value: join, label: t(`condition.join.${join}`) }))}
				defaultValue={value.join}
			/>
			{Array.from({ length: shown }, (_, index) => `${name}.lines[${index}]`).map((line, index) => (
				<LineFields
					key={line}
					name={line}
					number={index + 1}
					line={value.lines[index]}
					offered={offered}
					problems={problems}
				/>
			))}
			{asksWhenUnsure && (
				<ChoiceField
					kind="select"
					name={`${name}.unsure`}
					legend={t("condition.unsure.legend")}
					help={t("condition.unsure.help")}
					options={(["ask", "skip"] as const).map((one) => ({ value: one, label: t(`condition.unsure.${one}`) }))}
					defaultValue={value.unsure}
				/>
			)}
		</>
	);
}

type LineFieldsProps = { name: string; number: number; line?: Line; offered: Question[]; problems?: Problem[] };

function LineFields({ name, number, line, offered, problems }: LineFieldsProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const nameOf = (question: Question) => said(question.label ?? question.text);
	const chosen = offered.find(({ key }) => key === line?.question);
	const isGone = line?.question && !chosen;
	const choices = offered.filter((question) => "options" in question);
	const measured = offered.filter((question) => !("options" in question));
	const problemOf = (field: string) => problems?.find((problem) => problem.field === `${name}.${field}`);
	const none = { value: "", label: t("condition.none") };
	return (
		<fieldset className="mb-4 border-l-2 border-line pl-4">
			<legend className="mb-2 font-bold">{t("condition.line", { number })}</legend>
			<div className="grid gap-x-6 sm:grid-cols-2">
				<ChoiceField
					kind="select"
					name={`${name}.question`}
					legend={t("condition.question")}
					options={[
						none,
						...offered.map((question) => ({ value: question.key, label: nameOf(question) })),
						...(isGone ? [{ value: line.question!, label: t("condition.gone") }] : []),
					]}
					defaultValue={line?.question ?? ""}
					problem={problemOf("question")}
				/>
				<ChoiceField
					kind="select"
					name={`${name}.compare`}
					legend={t("condition.compare")}
					options={comparisons
						.filter((compare) => !chosen || !("options" in chosen) || compare === "=" || compare === "!=")
						.map((compare) => ({ value: compare, label: t(`condition.sign.${wordOf[compare]}`) }))}
					defaultValue={line?.compare ?? "="}
				/>
				{choices.length > 0 && (!chosen || "options" in chosen) && (
					<ChoiceField
						kind="select"
						name={`${name}.answer`}
						legend={t("condition.answer")}
						options={[
							none,
							...(chosen && "options" in chosen ? [chosen] : choices).flatMap((question) =>
								"options" in question
									? question.options.map(({ key, text }) => ({
											value: `${question.key}:${key}`,
											label: said(text),
											group: nameOf(question),
										}))
									: [],
							),
						]}
						defaultValue={line?.answer ?? ""}
						problem={problemOf("answer")}
					/>
				)}
				{measured.length > 0 && (!chosen || !("options" in chosen)) && (
					<>
						<TextField
							name={`${name}.value`}
							label={t(chosen?.type === "date" ? "condition.day" : "condition.value")}
							type={chosen?.type === "date" ? "date" : "text"}
							defaultValue={line?.value ?? ""}
							problem={problemOf("value")}
							size="medium"
							maxLength={60}
						/>
						<ChoiceField
							kind="select"
							name={`${name}.other`}
							legend={t("condition.other")}
							options={[none, ...measured.map((question) => ({ value: question.key, label: nameOf(question) }))]}
							defaultValue={line?.other ?? ""}
							problem={problemOf("other")}
						/>
						<TextField
							name={`${name}.times`}
							label={t("condition.timesField")}
							defaultValue={line?.times ?? ""}
							problem={problemOf("times")}
							size="short"
							inputMode="decimal"
							maxLength={20}
							optional
						/>
					</>
				)}
			</div>
		</fieldset>
	);
}

/** What the fields of a condition are called, for the summary of problems. */
export function useConditionLabels() {
	const { t } = useTranslation("forms");
	return (name: string): Record<string, string> =>
		Object.fromEntries(
			Array.from({ length: mostLines }, (_, index) => `${name}.lines[${index}]`).flatMap((line) => [
				[`${line}.question`, t("condition.question")],
				[`${line}.answer`, t("condition.answer")],
				[`${line}.value`, t("condition.value")],
				[`${line}.other`, t("condition.other")],
				[`${line}.times`, t("condition.timesField")],
			]),
		);
}
