import { createInstance } from "i18next";
import type { Language } from "#app/i18n/language.ts";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";

// Mail has an instance of its own: a job has no request whose language it could take.
const instance = createInstance({ ...i18nextSettings, lng: "en", resources });
let ready: Promise<unknown> | undefined;

/** The translating function of a job: of mail in the addressee's language, or of another namespace. */
export async function mailWords(language: Language, namespace: "mail" | "dataroom" = "mail") {
	ready ??= instance.init();
	await ready;
	return instance.getFixedT(language, namespace);
}
