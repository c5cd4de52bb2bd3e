import { createInstance } from "i18next";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import type { Language } from "#app/i18n/language.ts";
import type { Say } from "#app/publish/drafting/draft-report.ts";

/** The sentences of a report's first draft in both languages, whatever the associate's own. */
export async function draftWords(): Promise<{ en: Say; es: Say }> {
	const words = createInstance();
	await words.init({ ...i18nextSettings, resources, lng: "en" });
	const sayIn = (language: Language): Say => {
		const t = words.getFixedT(language, "public");
		return (key, { crop, second, named, measure, ...values } = {}) =>
			t([`report_draft.${key}_${measure}`, `report_draft.${key}`], {
				...values,
				named: named && t(`common:crop.${named}`),
				second: second && t([`crop_said.${second}`, `common:crop.${second}`]),
				crop: crop && t([`crop_said.${crop}`, `common:crop.${crop}`]),
			});
	};
	return { en: sayIn("en"), es: sayIn("es") };
}
