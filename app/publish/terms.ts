import type { TFunction } from "i18next";
import type { Language } from "#app/i18n/language.ts";
import type { Words } from "#app/lib/words.ts";

/** What released figures may not be used for, and how they are named. Which terms hold is the network's to say. */
export const termKeys = ["noIdentify", "noLink", "cite", "tell"] as const;

const inOne = (t: TFunction) => termKeys.map((key) => t(`dataroom:terms.${key}`)).join(" ");

/** The terms as one text, for files that have one place for them. */
export function termsOf(words: Record<Language, TFunction>): Words {
	return { en: inOne(words.en), es: inOne(words.es) };
}
