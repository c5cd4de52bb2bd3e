import type { i18n as Words } from "i18next";
import { useTranslation } from "react-i18next";
import { type Formatter, formatterFor } from "#app/lib/format.ts";

/** Kept for as long as its words are: a table makes a figure of each of its rows, which all look the same words up. */
const kept = new WeakMap<Words, { language: string; format: Formatter }>();

/** The formatter of the page's language. */
export function useFormat(): Formatter {
	const { i18n } = useTranslation();
	const before = kept.get(i18n);
	if (before?.language === i18n.language) return before.format;
	const format = formatterFor(i18n.language, i18n.getFixedT(i18n.language, "common"));
	kept.set(i18n, { language: i18n.language, format });
	return format;
}
