import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { DrawnCell, DrawnClass } from "./map-data.ts";

export type Counted = {
	cells: DrawnCell[];
	/** Counties that are drawn without a cell. */
	unasked: number;
	/** They are then in no district, and no such number stands beside those that count districts. */
	ofDistricts?: boolean;
};
/** A line of the legend: a class by its index or one of the signs, in words, with how many areas each map has of it. */
export type LegendEntry = {
	sign: number | Exclude<DrawnCell["look"], "number"> | "no_district";
	words: string;
	counts: number[];
};

const unasked = (map: Counted | undefined, ofDistricts: boolean) =>
	map && Boolean(map.ofDistricts) === ofDistricts ? map.unasked : 0;

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
			counts: withLook("no_figure").map((number, index) => number + unasked(maps[index], false)),
		},
	];
	const outside = maps.some((map) => unasked(map, true) > 0);

	return [
		...classes.map(({ from, to }, index) => ({
			sign: index,
			words: from === to ? format.figure(from, measure) : format.range(from, to, measure),
			counts: count((cell) => cell.classIndex === index),
		})),
		...signs.filter(({ counts }) => counts.some((number) => number > 0)),
		...(outside ? [{ sign: "no_district" as const, words: t("map.legend.no_district"), counts: [] }] : []),
	];
}
