import { useTranslation } from "react-i18next";
import { type FormDraft, findQuestion } from "#app/collect/editing/draft.ts";
import type { Question } from "#app/collect/form.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Comparison, Condition } from "#app/lib/condition.ts";
import { decimalsOf } from "#app/lib/format.ts";

/** What a part of a form is called: in the reader's language, in the other where that is missing, or as it stands. */
export function useFormWords() {
	const { t, i18n } = useTranslation("forms");
	return (words: { en: string; es: string }) => wordsIn(words, i18n.language) || words.en || words.es || t("untitled");
}

/** A condition as a sentence's part, like "Trees hit is more than 0, and Crop is Plum". */
export function useConditionWords(draft: Pick<FormDraft, "screens">) {
	const { t } = useTranslation("forms");
	const format = useFormat();
	const said = useFormWords();
	const nameOf = (key: string) => {
		const question = findQuestion(draft, key)?.question;
		return question ? said(question.label ?? question.text) : t("condition.gone");
	};
	const rightOf = ({ question: left, to }: Comparison): string => {
		if ("question" in to) {
			const other = nameOf(to.question);
			const { times } = to;
			return times === undefined
				? t("condition.named", { question: other })
				: t("condition.times", { times: format.number(times, decimalsOf(times)), question: other });
		}
		if (typeof to.value === "number") return format.number(to.value, decimalsOf(to.value));
		const question = findQuestion(draft, left)?.question;
		return question ? valueIn(question, to.value) : to.value;
	};
	const valueIn = (question: Question, value: string): string => {
		const option = "options" in question ? question.options.find(({ key }) => key === value) : undefined;
		if (option) return said(option.text);
		return question.type === "date" && !Number.isNaN(Date.parse(value)) ? format.day(value) : value;
	};
	const inWords = (condition: Condition): string => {
		if ("all" in condition) return condition.all.map(inWords).join(t("condition.and"));
		if ("any" in condition) return condition.any.map(inWords).join(t("condition.or"));
		if ("not" in condition) return t("condition.not", { condition: inWords(condition.not) });
		if ("any_planting" in condition) return t("condition.ofAny", { condition: inWords(condition.any_planting) });
		const { question, compare } = condition;
		return t(`condition.says.${wordOf[compare]}`, { question: nameOf(question), value: rightOf(condition) });
	};
	return inWords;
}

export const wordOf = {
	"=": "is",
	"!=": "is_not",
	"<": "less",
	"<=": "at_most",
	">": "more",
	">=": "at_least",
} as const satisfies Record<Comparison["compare"], string>;
