import { createInstance } from "i18next";
import { StrictMode, startTransition } from "react";
import { hydrateRoot } from "react-dom/client";
import { I18nextProvider, initReactI18next } from "react-i18next";
import { HydratedRouter } from "react-router/dom";
import { z } from "zod";
import { isLanguage } from "#app/i18n/language.ts";
import { loadLanguage } from "#app/i18n/load-language.client.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { tellHalfTypedDays } from "#app/lib/half-typed-days.ts";
import { holdRefusedPosts } from "#app/lib/held-post.ts";

// The content security policy forbids building functions from text, which zod would try for speed.
z.config({ jitless: true });

async function hydrate() {
	const documentLanguage = document.documentElement.lang;
	const language = isLanguage(documentLanguage) ? documentLanguage : "en";
	const i18next = createInstance();
	await i18next
		.use(initReactI18next)
		.init({ ...i18nextSettings, lng: language, resources: { [language]: await loadLanguage(language) } });
	startTransition(() => {
		hydrateRoot(
			document,
			<I18nextProvider i18n={i18next}>
				<StrictMode>
					<HydratedRouter />
				</StrictMode>
			</I18nextProvider>,
		);
	});
}

tellHalfTypedDays(document);
holdRefusedPosts();
void hydrate();
