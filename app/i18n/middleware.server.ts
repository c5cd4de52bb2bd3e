import { createCookie, type RouterContextProvider } from "react-router";
import { initReactI18next } from "react-i18next";
import { createI18nextMiddleware } from "remix-i18next/middleware";
import { isLanguage, type Language, languages } from "./language.ts";
import { resources } from "./resources.ts";
import { i18nextSettings } from "./settings.ts";

/** A visitor's own choice of language, which beats what the browser asks for. */
export const languageCookie = createCookie("tallygrove_language", {
	path: "/",
	sameSite: "lax",
	httpOnly: true,
	maxAge: 365 * 86_400,
});

const [i18nextMiddleware, getLocale, getInstance] = createI18nextMiddleware({
	detection: {
		supportedLanguages: [...languages],
		fallbackLanguage: "en",
		cookie: languageCookie,
		order: ["cookie", "header"],
	},
	i18next: { ...i18nextSettings, resources },
	plugins: [initReactI18next],
});
export { i18nextMiddleware, getInstance };

export function getLanguage(context: Readonly<RouterContextProvider>): Language {
	const locale = getLocale(context);
	return isLanguage(locale) ? locale : "en";
}

/**
 * A page that a mail leads to is in the language of the mail until its visitor chooses one. Without a redirect: a mail
 * program follows none.
 */
export async function speakLikeMail(
	context: Readonly<RouterContextProvider>,
	request: Request,
	language: string,
): Promise<void> {
	const chosen: unknown = await languageCookie.parse(request.headers.get("cookie"));
	if (!chosen && language !== getLanguage(context)) await getInstance(context).changeLanguage(language);
}

/** The translating function of a request, for what a loader or action says. */
export function getT(context: Readonly<RouterContextProvider>, namespace: string) {
	return getInstance(context).getFixedT(getLanguage(context), namespace);
}
