import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import type { Question } from "#app/collect/form.ts";
import type { StepValues } from "#app/collect/step-fields.ts";
import type { FilledFrom } from "#app/collect/step-values.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import { canonicalUnit, unitFamilyOf, unitsFor } from "#app/collect/units.ts";
import { ChoiceField } from "#app/components/choice-field.tsx";
import { TextField } from "#app/components/text-field.tsx";
import { wordsIn } from "#app/i18n/language.ts";
import type { Problem } from "#app/lib/parse-form.ts";
import { CrateBox } from "./crate-box.tsx";
import { PhotoField } from "./photo-field.tsx";
import { UnknownBoxes } from "./unknown-boxes.tsx";

type QuestionFieldProps = {
	question: Question;
	planting: PlantingAsked | null;
	values: StepValues;
	problems: Problem[];
	/** false where the screen asks once whether the grower knows, for all its questions. */
	mayNotKnow: boolean;
	/** From where the box is filled in, as long as nobody has answered. */
	filledFrom?: FilledFrom;
	/** Where a photo of the survey is. */
	photoHref: (photoId: string) => string;
};

/** What a question is called in a sentence about it. */
export function labelOf(question: Question, language: string): string {
	return wordsIn(question.label ?? question.text, language);
}

/** One question of a form as a field, by its type. */
export function QuestionField(props: QuestionFieldProps) {
	const { question } = props;
	switch (question.type) {
		case "choice":
		case "rating":
		case "several":
			return <OptionsField {...props} question={question} />;
		case "photo": {
			const { values, problems, photoHref } = props;
			const photoIds = [values[question.key] ?? []].flat();
			return <PhotoField question={question} photoIds={photoIds} problems={problems} hrefOf={photoHref} />;
		}
		default:
			return <BoxField {...props} question={question} />;
	}
}

type Options = Extract<Question, { options: unknown }>;

function OptionsField({ question, values, problems }: QuestionFieldProps & { question: Options }) {
	const { t, i18n } = useTranslation("grower");
	return (
		<ChoiceField
			kind={question.type === "several" ? "checkbox" : "radio"}
			name={question.key}
			legend={wordsIn(question.text, i18n.language)}
			help={question.help && wordsIn(question.help, i18n.language)}
			noun={labelOf(question, i18n.language)}
			optional={!question.required}
			options={[
				...question.options.map(({ key, text }) => ({ value: key, label: wordsIn(text, i18n.language) })),
				{ value: "_dont_know", label: t("unknown.dont_know") },
				{ value: "_refused", label: t("unknown.refused") },
			]}
			defaultValue={values[question.key]}
			problem={problems.find(({ field }) => field === question.key)}
		/>
	);
}

type Box = Exclude<Question, Options | { type: "photo" }>;

function BoxField(props: QuestionFieldProps & { question: Box }) {
	const { question, planting, values, problems, mayNotKnow, filledFrom } = props;
	const { t, i18n } = useTranslation("grower");
	const label = wordsIn(question.text, i18n.language);
	const typed = values[question.key];
	const isNote = !question.required && (question.type === "short_text" || question.type === "long_text");
	const crate = `${question.key}_crate`;
	return (
		<TextField
			name={question.key}
			label={label}
			help={helpOf(question, i18n.language, filledFrom, t)}
			noun={labelOf(question, i18n.language)}
			optional={!question.required}
			defaultValue={typeof typed === "string" ? typed : ""}
			problem={problems.find(({ field }) => field === question.key)}
			type={question.type === "date" ? "date" : "text"}
			inputMode={inputModes[question.type]}
			multiline={question.type === "long_text"}
			size={question.type === "number" || question.type === "percent" ? "short" : undefined}
			autoComplete="off"
			suffix={<UnitOf question={question} planting={planting} values={values} label={label} />}
			below={
				<>
					{unitFamilyOf(question) === "mass" && (
						<CrateBox
							name={crate}
							question={label}
							value={values[crate]}
							problem={problems.find(({ field }) => field === crate)}
						/>
					)}
					{/* A note that nobody has to write needs no box for not writing it. */}
					{mayNotKnow && !isNote && (
						<UnknownBoxes
							name={`${question.key}_kind`}
							about={t("unknown.about", { question: label })}
							values={values}
						/>
					)}
				</>
			}
		/>
	);
}

/** What helps with the answer; what is filled in says whence, so that it is confirmed and not overlooked. */
function helpOf(question: Question, language: string, filledFrom: FilledFrom | undefined, t: TFunction<"grower">) {
	const help = question.help && wordsIn(question.help, language);
	if (!filledFrom) return help;
	const whence =
		filledFrom === "plantings"
			? t("screen.fromPlantings")
			: t("screen.fromSeason", { season: String(filledFrom.season) });
	return help ? `${whence} ${help}` : whence;
}

const inputModes = {
	number: "decimal",
	percent: "decimal",
	date: undefined,
	short_text: "text",
	long_text: "text",
} as const;

type UnitProps = { question: Box; planting: PlantingAsked | null; values: StepValues; label: string };

/** The unit beside the box: words where there is one, a choice where a grower may tell it in several. */
export function UnitOf({ question, planting, values, label }: UnitProps) {
	const { t } = useTranslation("grower");
	if (question.type === "percent") return "%";
	if (question.type !== "number") return null;
	if (question.unitFamily === "trees") return t(`screen.plants.${planting?.plantKind ?? "any"}`);
	const family = unitFamilyOf(question);
	if (family === undefined) return null;
	const name = `${question.key}_unit`;
	const chosen = values[name];
	return (
		<select
			name={name}
			aria-label={t("screen.unitOf", { question: label })}
			defaultValue={typeof chosen === "string" ? chosen : canonicalUnit(family)}
			className="min-h-11 rounded-plat border border-field bg-paper px-3 py-2 text-ink"
		>
			{unitsFor(family, planting?.bushelLb ?? null).map((unit) => (
				<option key={unit} value={unit}>
					{t(`screen.unit.${unit}`)}
				</option>
			))}
		</select>
	);
}
