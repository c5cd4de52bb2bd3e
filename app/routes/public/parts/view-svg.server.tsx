import { createInstance, type i18n } from "i18next";
import { renderToStaticMarkup } from "react-dom/server";
import { I18nextProvider } from "react-i18next";
import type { Language } from "#app/i18n/language.ts";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { ViewPicture, type ViewPictureProps } from "./view-picture.tsx";

const spoken = new Map<Language, i18n>();

/** The words of one language, whatever the asker's own: the address of a picture says which it is drawn in. */
async function wordsOf(language: Language): Promise<i18n> {
	const kept = spoken.get(language);
	if (kept) return kept;
	const words = createInstance();
	await words.init({ ...i18nextSettings, resources, lng: language });
	spoken.set(language, words);
	return words;
}

/** A view of the map as an SVG file: the same view in the same language is the same text, to the byte. */
export async function viewSvg(props: ViewPictureProps, language: Language): Promise<string> {
	return renderToStaticMarkup(
		<I18nextProvider i18n={await wordsOf(language)}>
			<ViewPicture {...props} />
		</I18nextProvider>,
	);
}
