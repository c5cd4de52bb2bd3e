import { useTranslation } from "react-i18next";
import { numbered } from "#app/components/chart/chart-look.ts";
import { useFinding } from "#app/components/chart/use-finding.ts";
import { wordsIn } from "#app/i18n/language.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { CropCell } from "#app/publish/cell.ts";
import type { ReleaseMeasure } from "#app/publish/release.ts";

/** The figure of all areas of a map together, in one season. */
export type WholeFigure = { season: number; cell: CropCell };
type Mapped = { measure: ReleaseMeasure; cropKey: string; state: string | null; wholes: WholeFigure[] };

/** What a map shows first, as a sentence: the figure of the whole that it draws, or of two seasons. Null where none can be told. */
export function useMapFinding() {
	const { t, i18n } = useTranslation("public");
	const format = useFormat();
	const ofSeasons = useFinding();
	return ({ measure, cropKey, state, wholes }: Mapped): string | null => {
		const [whole] = wholes;
		if (!whole || numbered(wholes.map(({ cell }) => cell)).length < wholes.length) return null;
		const area = state === null ? t("map.finding.network") : t(`common:state.${state}`);
		if (wholes.length > 1) {
			const finding = ofSeasons({ chart: "seasons", measure, cropKey, area: whole.cell, rows: wholes });
			return t("map.finding.placed", { area, finding });
		}
		return t([`map.finding.${measure.key}_${cropKey}`, `map.finding.${measure.key}`, "map.finding.other"], {
			area,
			season: whole.season,
			measure: wordsIn(measure.label, i18n.language),
			crop: t([`crop_said.${cropKey}`, `common:crop.${cropKey}`]),
			value: format.figure(whole.cell.value ?? 0, { ...measure, season: whole.season }),
		});
	};
}
