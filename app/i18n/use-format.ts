import { useTranslation } from "react-i18next";
import { formatterFor } from "#app/lib/format.ts";

/** The formatter of the page's language. */
export function useFormat() {
	const { t, i18n } = useTranslation();
	return formatterFor(i18n.language, t);
}
