import { Fragment } from "react";
import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import type { ToldFigure, ToldPart, ToldWords } from "./report-data.ts";

/** A looked-up figure as words inside a sentence: the number with its likely range, or the words for why there is none. */
export function useFigureWords() {
	const { t } = useTranslation("public");
	const format = useFormat();
	return (figure: ToldFigure): string => {
		if (!figure) return t("report.noFigure");
		const { measure, cell } = figure;
		if (cell.status === "withheld") return t("report.inText.withheld");
		if (cell.status === "no_growers") return t("report.inText.noGrowers");
		if (cell.steadiness === "rough") return t("report.inText.rough");
		if (cell.value === null || cell.steadiness === null) return t("report.inText.notAsked");
		const said = {
			value: format.figure(cell.value, measure),
			...format.ends(cell.lower ?? cell.value, cell.upper ?? cell.value, measure),
		};
		return t(cell.steadiness === "care" ? "report.inText.care" : "report.inText.steady", said);
	};
}

/** A report's text as one string, for a title. */
export function useToldText() {
	const { i18n } = useTranslation();
	const words = useFigureWords();
	return (told: ToldWords): string =>
		partsIn(told, i18n.language)
			.map((part) => (part.kind === "text" ? part.text : words(part.figure)))
			.join("");
}

export function partsIn(told: ToldWords, language: string): ToldPart[] {
	return language === "es" ? told.es : told.en;
}

/** A report's text as paragraphs; a figure in it stays on one line and is set off. */
export function ToldText({ told, language }: { told: ToldWords; language?: string }) {
	const { i18n } = useTranslation();
	const words = useFigureWords();
	return (
		<>
			{paragraphsOf(partsIn(told, language ?? i18n.language)).map((parts, index) => (
				// Paragraphs have no name but their place, and are never reordered apart from their text.
				// oxlint-disable-next-line react/no-array-index-key
				<p key={index} className="my-3 max-w-prose first:mt-0">
					{parts.map((part, place) => (
						// oxlint-disable-next-line react/no-array-index-key
						<Fragment key={place}>{part.kind === "text" ? part.text : <strong>{words(part.figure)}</strong>}</Fragment>
					))}
				</p>
			))}
		</>
	);
}

function paragraphsOf(parts: ToldPart[]): ToldPart[][] {
	const paragraphs: ToldPart[][] = [[]];
	for (const part of parts) {
		if (part.kind === "figure") {
			paragraphs.at(-1)?.push(part);
			continue;
		}
		for (const [index, text] of part.text.split(/\n\s*\n/).entries()) {
			if (index > 0) paragraphs.push([]);
			if (text) paragraphs.at(-1)?.push({ kind: "text", text });
		}
	}
	return paragraphs.filter((paragraph) => paragraph.length > 0);
}
