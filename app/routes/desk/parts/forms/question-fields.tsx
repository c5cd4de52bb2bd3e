import { useTranslation } from "react-i18next";
import type { DeskForm } from "#app/collect/editing/form-drafts.server.ts";
import { questionsBefore } from "#app/collect/editing/condition-lines.ts";
import { questionTypes } from "#app/collect/editing/edit-questions.ts";
import {
	limitNames,
	mostOptions,
	type QuestionFields as Fields,
	unitFamilies,
} from "#app/collect/editing/question.schema.ts";
import type { Question, Screen } from "#app/collect/form.ts";
import { CheckField } from "#app/components/check-field.tsx";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { Section } from "#app/components/section.tsx";
import { TextField } from "#app/components/text-field.tsx";
import type { Problem } from "#app/lib/parse-form.ts";
import { ConditionFields, useConditionLabels } from "./condition-fields.tsx";
import { useFormWords } from "./condition-words.ts";
import { OptionFields } from "./option-fields.tsx";
import { TextPair, usePairLabels } from "./text-pair.tsx";

type QuestionFieldsProps = {
	form: Pick<DeskForm, "draft" | "held">;
	question: Question;
	screen: Screen;
	value: Fields;
	problems?: Problem[];
};

/** All that can be said of a question, in the order in which one thinks of it. */
export function QuestionFields({ form, question, screen, value, problems }: QuestionFieldsProps) {
	const { t } = useTranslation("forms");
	const isHeld = form.held.includes(question.key);
	return (
		<>
			<TextPair name="text" label={t("question.text")} value={value.text} problems={problems} rows={2} />
			<TextPair name="help" label={t("question.help")} value={value.help} problems={problems} rows={2} optional />
			<TextPair
				name="label"
				label={t("question.label")}
				help={t("question.labelHelp")}
				value={value.label}
				problems={problems}
				optional
			/>
			<ChoiceField
				kind="select"
				name="type"
				legend={t("question.type")}
				help={isHeld ? t("question.typeHeld") : t("question.typeHelp")}
				options={questionTypes
					.filter((type) => !isHeld || type === question.type)
					.map((type) => ({ value: type, label: t(`type.${type}`) }))}
				defaultValue={value.type}
			/>
			<OwnParts question={question} screen={screen} value={value} problems={problems} isHeld={isHeld} />
			{question.type !== "photo" && (
				<CheckField name="required" label={t("question.required")} defaultChecked={value.required} />
			)}
			<CheckField
				name="sensitive"
				label={t("question.sensitive")}
				help={t("question.sensitiveHelp")}
				defaultChecked={value.sensitive}
			/>
			<Section title={t("condition.title")} level={3}>
				<ConditionFields
					name="condition"
					value={value.condition}
					problems={problems}
					kept={question.condition}
					draft={form.draft}
					offered={questionsBefore(form.draft, question.key)}
					asksWhenUnsure
				/>
			</Section>
		</>
	);
}

type OwnPartsProps = Omit<QuestionFieldsProps, "form"> & { isHeld: boolean };

/** What belongs to the question's type as it is kept; another type shows its own fields once it is saved. */
function OwnParts({ question, screen, value, problems, isHeld }: OwnPartsProps) {
	const { t } = useTranslation("forms");
	switch (question.type) {
		case "number":
			return (
				<>
					<ChoiceField
						kind="select"
						name="unitFamily"
						legend={t("question.unit")}
						options={unitFamilies
							.filter((family) => !isHeld || family === question.unitFamily)
							.map((family) => ({ value: family, label: t(`unit.${family}`) }))}
						defaultValue={value.unitFamily}
					/>
					{screen.perPlanting && <PrefillField value={value} />}
					<LimitFields value={value} problems={problems} unit={t(`unit.kept.${question.unitFamily}`)} />
				</>
			);
		case "percent":
			return <LimitFields value={value} problems={problems} unit="%" />;
		case "date":
			return <OrderField question={question} screen={screen} value={value} />;
		case "short_text":
		case "long_text":
			return (
				<TextField
					name="maxLength"
					label={t("question.maxLength")}
					defaultValue={value.maxLength}
					problem={problems?.find(({ field }) => field === "maxLength")}
					inputMode="numeric"
					size="short"
					maxLength={60}
				/>
			);
		case "choice":
		case "several":
		case "rating":
			return <OptionFields type={question.type} value={value.options} problems={problems} isHeld={isHeld} />;
		case "photo":
			return null;
	}
}

function PrefillField({ value }: { value: Fields }) {
	const { t } = useTranslation("forms");
	return (
		<ChoiceField
			kind="select"
			name="prefill"
			legend={t("question.prefill.legend")}
			options={[
				{ value: "", label: t("question.prefill.none") },
				{ value: "bearing_trees", label: t("question.prefill.bearing_trees") },
				{ value: "last_season", label: t("question.prefill.last_season") },
			]}
			defaultValue={value.prefill ?? ""}
		/>
	);
}

type LimitFieldsProps = { value: Fields; problems?: Problem[]; unit: string };

/** Hard limits are refused; soft ones are asked about once. */
function LimitFields({ value, problems, unit }: LimitFieldsProps) {
	const { t } = useTranslation("forms");
	return (
		<fieldset className="mb-2">
			<legend className="mb-2 font-bold">{t("limits.title")}</legend>
			<div className="grid gap-x-6 sm:grid-cols-2">
				{limitNames.map((name) => (
					<TextField
						key={name}
						name={`limits.${name}`}
						label={t(`limits.${name}`)}
						defaultValue={value.limits[name] ?? ""}
						problem={problems?.find(({ field }) => field === `limits.${name}`)}
						suffix={unit}
						inputMode="decimal"
						size="short"
						maxLength={60}
						optional
					/>
				))}
			</div>
		</fieldset>
	);
}

type OrderFieldProps = { question: Question; screen: Screen; value: Fields };

/** Only an earlier day of the same screen can be compared before both are sent. */
function OrderField({ question, screen, value }: OrderFieldProps) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const before = screen.questions.slice(0, screen.questions.indexOf(question)).filter(({ type }) => type === "date");
	if (before.length === 0) return null;
	return (
		<ChoiceField
			kind="select"
			name="notBefore"
			legend={t("question.notBefore")}
			options={[
				{ value: "", label: t("question.anyDay") },
				...before.map(({ key, text, label }) => ({ value: key, label: said(label ?? text) })),
			]}
			defaultValue={value.notBefore ?? ""}
		/>
	);
}

/** What the fields are called, for the summary of problems. */
export function useQuestionLabels(): Record<string, string> {
	const { t } = useTranslation("forms");
	const conditions = useConditionLabels();
	const inBoth = usePairLabels();
	const rows = Array.from({ length: mostOptions }, (_, index) => ({ name: `options[${index}]`, number: index + 1 }));
	return {
		...inBoth({ text: t("question.text"), label: t("question.label"), help: t("question.help") }),
		type: t("question.type"),
		maxLength: t("question.maxLength"),
		...Object.fromEntries(limitNames.map((name) => [`limits.${name}`, t(`limits.${name}`)])),
		...inBoth(Object.fromEntries(rows.map(({ name, number }) => [name, t("option.text", { number })]))),
		...Object.fromEntries(rows.map(({ name, number }) => [`${name}.score`, t("option.score", { number })])),
		...conditions("condition"),
	};
}
