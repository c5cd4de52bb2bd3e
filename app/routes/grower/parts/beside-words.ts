import { useTranslation } from "react-i18next";
import type { OwnFigure } from "#app/collect/own-facts.server.ts";
import { useAreaName } from "#app/components/map/area-name.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { Comparison } from "#app/publish/comparison.server.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";

type Beside = { own: OwnFigure; measure: ReleaseMeasure; cell: Comparison["cells"][string] };

/**
 * A grower's own value beside an area's, in one sentence. A value within the area's likely range is told as about the same:
 * it is not known to differ.
 */
export function useBesideWords() {
	const { t } = useTranslation("orchard");
	const format = useFormat();
	const nameOf = useAreaName();
	return ({ own, measure, cell }: Beside): string => {
		const { lower, upper } = cell;
		const figures = {
			area: nameOf(cell),
			own: format.figure(own.value, measure),
			value: format.figure(cell.value, measure),
		};
		if (lower === null || upper === null) return t("compare.said.alone", figures);
		const said = { ...figures, ...format.ends(lower, upper, measure) };
		if (own.yesOrNo) return t(`compare.said.${own.value > 0 ? "yes" : "no"}`, said);
		const shown = (value: number) => Number(value.toFixed(measure.decimals));
		const end = shown(own.value) > shown(upper) ? "above" : shown(own.value) < shown(lower) ? "below" : "within";
		if (measure.unit === "day" && end !== "within")
			return t(`compare.said.${end === "above" ? "later" : "earlier"}`, said);
		return t(`compare.said.${end}`, said);
	};
}
