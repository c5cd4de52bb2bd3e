import type { InitOptions } from "i18next";
import { languages } from "./language.ts";

/** Shared by server, browser and mail. A missing key is a bug that tests catch; React escapes, so i18next does not. */
export const i18nextSettings: InitOptions = {
	supportedLngs: [...languages],
	fallbackLng: "en",
	defaultNS: "common",
	interpolation: { escapeValue: false },
	returnNull: false,
};
