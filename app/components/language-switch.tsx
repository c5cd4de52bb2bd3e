import { useTranslation } from "react-i18next";
import { useLocation } from "react-router";
import { languages } from "#app/i18n/language.ts";

/** The other languages, each in its own words. A whole reload, as a browser holds the words of one language. */
export function LanguageSwitch() {
	const { t, i18n } = useTranslation();
	const { pathname, search } = useLocation();
	return (
		<form method="post" action="/language" aria-label={t("nav.language")}>
			<input type="hidden" name="returnTo" value={pathname + search} />
			{languages
				.filter((language) => language !== i18n.language)
				.map((language) => (
					<button
						key={language}
						name="language"
						value={language}
						lang={language}
						className="min-h-11 px-2 text-damson underline underline-offset-4 hover:decoration-2"
					>
						{t(`language.${language}`)}
					</button>
				))}
		</form>
	);
}
