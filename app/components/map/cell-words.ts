import { useTranslation } from "react-i18next";
import { onceEach, sentencePattern } from "#app/lib/sentence-pattern.ts";
import { useFormat } from "#app/i18n/use-format.ts";
import type { FigureShape } from "#app/lib/format.ts";
import type { DrawnCell } from "./map-data.ts";

/** "5-9" as it stands in the release, with the dash of print. */
export const bandText = (band: string) => band.replace("-", "–");

type Steadiness = NonNullable<DrawnCell["steadiness"]>;
const numberGaps = ["name", "value", "lower", "upper"] as const;

/** One area's figure as a sentence, for whoever hears the map instead of seeing it. */
export function useCellWords(measure: FigureShape) {
	const { t } = useTranslation("public");
	const format = useFormat();
	const figure = onceEach((value: number) => format.figure(value, measure));
	const bandWords = onceEach((band: string | null | undefined) =>
		band ? t("map.said.band", { band: bandText(band) }) : "",
	);
	const blank = onceEach((look: "withheld" | "no_growers" | "no_figure") => {
		const words = look === "no_figure" ? t("common:figure.not_asked") : t(`map.legend.${look}`);
		return sentencePattern(["name"], ({ name }) => t("map.said.plain", { name, words }));
	});
	const rough = onceEach((band: string) =>
		sentencePattern(["name"], ({ name }) => t("map.said.rough", { name, band })),
	);
	const numberSaid = (sentence: "number" | "numberAlone") =>
		onceEach((key: Steadiness) => {
			const steadiness = t(`common:steadiness.${key}`);
			return onceEach((band: string) =>
				sentencePattern(numberGaps, (marks) => t(`map.said.${sentence}`, { ...marks, band, steadiness })),
			);
		});
	const [number, alone] = [numberSaid("number"), numberSaid("numberAlone")];
	return (name: string, cell: DrawnCell | undefined): string => {
		if (!cell) return blank("no_figure")({ name });
		if (cell.look === "withheld" || cell.look === "no_growers" || cell.look === "no_figure") {
			return blank(cell.look)({ name });
		}
		const band = bandWords(cell.respondentsBand);
		if (cell.look === "rough" || cell.value === null) return rough(band)({ name });
		const [steadiness, value] = [cell.steadiness ?? "care", figure(cell.value)];
		if (cell.lower === null || cell.upper === null) {
			return alone(steadiness)(band)({ name, value, lower: "", upper: "" });
		}
		const ends = format.ends(cell.lower, cell.upper, measure);
		return number(steadiness)(band)({ name, value, ...ends });
	};
}
