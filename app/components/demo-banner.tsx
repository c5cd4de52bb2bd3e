import { useTranslation } from "react-i18next";
import { languages } from "#app/i18n/language.ts";
import { useDemo } from "./shell-data.ts";

/** Says in every language that all here is invented, as nobody should take a demonstration's figures for real ones. */
export function DemoBanner() {
	const { i18n } = useTranslation();
	if (!useDemo()) return null;
	const ordered = languages.toSorted((a, b) => Number(b === i18n.language) - Number(a === i18n.language));
	return (
		<aside
			className="border-b border-quince bg-quince-wash px-gutter py-1.5 text-xs text-attention"
			lang={i18n.language}
		>
			{ordered.map((language) => (
				<span key={language} lang={language} className="mr-3 inline-block first:font-bold">
					{banner[language]}
				</span>
			))}
		</aside>
	);
}

// Both languages stand on one page, and a browser holds the words of one only.
const banner = {
	en: "Demonstration: invented network, people and figures",
	es: "Demostración: la red, las personas y las cifras son inventadas",
};
