import { useTranslation } from "react-i18next";
import { href } from "react-router";
import type { Finding } from "#app/collect/editing/before-opening.ts";
import type { FormDifference } from "#app/collect/editing/difference.ts";
import { type FormDraft, findQuestion, findScreen } from "#app/collect/editing/draft.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { useFormWords } from "./condition-words.ts";

/** What a finding is of, what it says, and where it is mended. */
export function useFindingWords(formId: string, draft: FormDraft) {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const format = useFormat();
	return ({ kind, screenKey, questionKey, measureKey, about, count = 0, language }: Finding) => {
		const question = questionKey === undefined ? undefined : findQuestion(draft, questionKey)?.question;
		const screen = screenKey === undefined ? undefined : findScreen(draft, screenKey);
		const whole = measureKey === undefined ? t("finding.whole") : t("layout.measures");
		const place = question ? said(question.label ?? question.text) : screen ? said(screen.title) : whole;
		const words = t(`finding.${kind}`, {
			about: about ? said(about) : "",
			count,
			value: format.number(count),
			language: language ? t(`language.${language}`) : "",
		});
		const to = question
			? href("/desk/forms/:formId/questions/:key", { formId, key: question.key })
			: screen
				? href("/desk/forms/:formId/screens/:key", { formId, key: screen.key })
				: href(measureKey === undefined ? "/desk/forms/:formId" : "/desk/forms/:formId/measures", { formId });
		return { place, words, to };
	};
}

/** One difference between two versions as a sentence. */
export function useDifferenceWords() {
	const { t } = useTranslation("forms");
	const said = useFormWords();
	const told = (text: FormDifference["before"]) =>
		typeof text === "object" ? said(text) : text || t("difference.nothing");
	return ({ kind, about, language, before, after }: FormDifference): string =>
		t(`difference.${kind}`, {
			about: said(about),
			language: language ? t(`language.${language}`) : "",
			before: told(before),
			after: told(after),
		});
}
