export const languages = ["en", "es"] as const;
export type Language = (typeof languages)[number];

export function isLanguage(value: unknown): value is Language {
	return typeof value === "string" && (languages as readonly string[]).includes(value);
}

/** The locale of numbers and dates. es-US, as Spanish speakers in the states read decimal points and not commas. */
export function localeOf(language: string): "en-US" | "es-US" {
	return language === "es" ? "es-US" : "en-US";
}

/** One text out of a stored pair of languages. */
export function wordsIn(words: { en: string; es: string }, language: string): string {
	return language === "es" ? words.es : words.en;
}
