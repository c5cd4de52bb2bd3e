import { useTranslation } from "react-i18next";

/** What each field of a choice is called, also in a sentence about it. */
export function useTableLabels() {
	const { t } = useTranslation("dataroom");
	return {
		release: t("tables.field.release"),
		measure: t("tables.field.measure"),
		crop: t("tables.field.crop"),
		kind: t("tables.field.kind"),
		state: t("tables.field.state"),
		area: t("tables.field.area"),
		layout: t("tables.field.layout"),
		columns: t("tables.field.columns"),
		show: t("tables.field.show"),
	};
}
