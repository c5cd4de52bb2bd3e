import type { TFunction } from "i18next";
import { useTranslation } from "react-i18next";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import { decimalsOf, type Formatter } from "#app/lib/format.ts";
import type { Problem } from "#app/lib/parse-form.ts";

/** A problem in the words of its field's label: alike beside the field and in the summary. */
export function useProblemText() {
	const { t, i18n } = useTranslation();
	return problemText(t, i18n.language, useFormat());
}

/** The same for a file, which no page draws. @param t of the shared words. */
export function problemText(t: TFunction, language: string, format: Formatter) {
	return (problem: Problem, label: string): string => {
		if (problem.words) return wordsIn(problem.words, language);
		// A question makes no noun: "Enter how many did you pick?" reads wrong.
		const noun = /[?¿]/.test(label) ? t("problem.your_answer") : label.replace(/[:.]\s*$/, "");
		const detail = Object.entries(problem.detail ?? {}).map(([key, value]) => [
			key,
			typeof value === "number" ? format.number(value, decimalsOf(value)) : value,
		]);
		const values: Record<string, string | undefined> = {
			...Object.fromEntries(detail),
			label: lowerFirst(noun),
			Label: upperFirst(noun),
		};
		return String(t([`problem.${problem.code}`, "problem.wrong"], values));
	};
}

/** Leaves "ZIP code" and "E-mail" of one letter alone only where the second letter is a capital too. */
function lowerFirst(text: string): string {
	return /^\p{Lu}\p{Lu}/u.test(text) ? text : text.charAt(0).toLowerCase() + text.slice(1);
}

function upperFirst(text: string): string {
	return text.charAt(0).toUpperCase() + text.slice(1);
}
