export const languages = ["en", "es"] as const;
export type Language = (typeof languages)[number];

export function isLanguage(value: unknown): value is Language {
	return typeof value === "string" && (languages as readonly string[]).includes(value);
}

/** One text out of a stored pair of languages. */
export function wordsIn(words: { en: string; es: string }, language: string): string {
	return language === "es" ? words.es : words.en;
}
