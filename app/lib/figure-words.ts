import type { TFunction } from "i18next";
import type { FigureShape, Formatter } from "./format.ts";

/** A figure of a report as a sentence tells it: a released one, one of earlier seasons, or a count of cells. */
export type SaidFigure =
	| {
			measure: FigureShape;
			cell: {
				status: "shown" | "withheld" | "no_growers";
				value: number | null;
				lower: number | null;
				upper: number | null;
				steadiness: "steady" | "care" | "rough" | null;
			};
			earlier?: { of: "last" | "mean"; seasons: number[] };
	  }
	| { count: number }
	| null;

/** A figure inside a sentence: the number with its likely range, or the words for why there is none. */
export function figureWords(figure: SaidFigure, t: TFunction, format: Formatter): string {
	if (!figure) return t("public:report.noFigure");
	if ("count" in figure) return format.number(figure.count);
	const { measure, cell, earlier } = figure;
	if (cell.status === "withheld") return t("public:report.inText.withheld");
	if (cell.status === "no_growers") return t("public:report.inText.noGrowers");
	if (cell.steadiness === "rough") return t("public:report.inText.rough");
	if (cell.value === null || cell.steadiness === null) return t("public:report.inText.notAsked");
	const value = format.figure(cell.value, measure);
	const seasons = format.list((earlier?.seasons ?? []).map(String));
	if (earlier?.of === "mean") return t("report:inText.mean", { value, seasons });
	if (cell.lower === null || cell.upper === null) {
		return earlier ? t("report:inText.lastAlone", { value, seasons }) : t("public:report.inText.alone", { value });
	}
	const said = { value, seasons, ...format.ends(cell.lower, cell.upper, measure) };
	if (earlier) return t("report:inText.last", said);
	return t(cell.steadiness === "care" ? "public:report.inText.care" : "public:report.inText.steady", said);
}

/** A text with its figures as one string, for titles, mail, feeds and what machines read. */
export function textWords(
	parts: ({ kind: "text"; text: string } | { kind: "figure"; figure: SaidFigure })[],
	t: TFunction,
	format: Formatter,
): string {
	return parts.map((part) => (part.kind === "text" ? part.text : figureWords(part.figure, t, format))).join("");
}

/** What a release tells of one figure: its number, or the word in its place. */
export function lookWords(
	{ look, value }: { look: "number" | "rough" | "withheld" | "no_growers" | "no_figure"; value: number | null },
	measure: FigureShape | undefined,
	t: TFunction,
	format: Formatter,
): string {
	if (look === "rough") return t("public:data.code.status.rough.word");
	if (look === "withheld") return t("common:figure.withheld");
	if (look === "no_growers") return t("common:figure.no_growers");
	if (look === "no_figure" || value === null || !measure) return t("common:figure.not_asked");
	return format.figure(value, measure);
}
