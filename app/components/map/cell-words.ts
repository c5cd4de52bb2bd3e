import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { DrawnCell } from "./map-data.ts";

/** "5-9" as it stands in the release, with the dash of print. */
export const bandText = (band: string) => band.replace("-", "–");

/** One area's figure as a sentence, for whoever hears the map instead of seeing it. */
export function useCellWords(measure: FigureShape) {
	const { t } = useTranslation("public");
	const format = useFormat();
	return (name: string, cell: DrawnCell | undefined): string => {
		if (!cell) return t("map.said.plain", { name, words: t("common:figure.not_asked") });
		if (cell.look === "withheld") return t("map.said.plain", { name, words: t("map.legend.withheld") });
		if (cell.look === "no_growers") return t("map.said.plain", { name, words: t("map.legend.no_growers") });
		if (cell.look === "no_figure") return t("map.said.plain", { name, words: t("common:figure.not_asked") });
		const band = cell.respondentsBand ? t("map.said.band", { band: bandText(cell.respondentsBand) }) : "";
		if (cell.look === "rough" || cell.value === null) return t("map.said.rough", { name, band });
		return t("map.said.number", {
			name,
			band,
			value: format.figure(cell.value, measure),
			...format.ends(cell.lower ?? cell.value, cell.upper ?? cell.value, measure),
			steadiness: t(`common:steadiness.${cell.steadiness ?? "care"}`),
		});
	};
}
