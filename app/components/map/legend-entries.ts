import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { DrawnCell, DrawnClass } from "./map-data.ts";

export type Counted = { cells: DrawnCell[]; /** Areas for which the survey asked nobody. */ notAsked: number };
/** A line of the legend: a class by its index or one of the signs, in words, with how many areas each map has of it. */
export type LegendEntry = {
	sign: number | Exclude<DrawnCell["look"], "number">;
	words: string;
	counts: number[];
};

/** The classes in their order, then the signs that a map has. */
export function useLegendEntries(maps: Counted[], classes: DrawnClass[], measure: FigureShape): LegendEntry[] {
	const { t } = useTranslation("public");
	const format = useFormat();
	const count = (wanted: (cell: DrawnCell) => boolean) => maps.map((map) => map.cells.filter(wanted).length);
	const withLook = (look: DrawnCell["look"]) => count((cell) => cell.look === look);
	const signs: LegendEntry[] = [
		{ sign: "rough", words: t("common:steadiness.rough"), counts: withLook("rough") },
		{ sign: "withheld", words: t("map.legend.withheld"), counts: withLook("withheld") },
		{ sign: "no_growers", words: t("map.legend.no_growers"), counts: withLook("no_growers") },
		{
			sign: "no_figure",
			words: t("common:figure.not_asked"),
			counts: withLook("no_figure").map((number, index) => number + (maps[index]?.notAsked ?? 0)),
		},
	];
	return [
		...classes.map(({ from, to }, index) => ({
			sign: index,
			words: from === to ? format.figure(from, measure) : format.range(from, to, measure),
			counts: count((cell) => cell.classIndex === index),
		})),
		...signs.filter(({ counts }) => counts.some((number) => number > 0)),
	];
}
