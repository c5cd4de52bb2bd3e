import { Fragment } from "react";
import { useTranslation } from "react-i18next";
import { useFormat } from "#app/i18n/use-format.ts";
import { figureWords, textWords } from "#app/lib/figure-words.ts";
import type { ToldFigure, ToldPart, ToldWords } from "./report-data.ts";

/** A looked-up figure as words inside a sentence, in the page's language. */
export function useFigureWords() {
	const { t } = useTranslation();
	const format = useFormat();
	return (figure: ToldFigure): string => figureWords(figure, t, format);
}

/** A report's text as one string, for a title. */
export function useToldText() {
	const { t, i18n } = useTranslation();
	const format = useFormat();
	return (told: ToldWords): string => textWords(partsIn(told, i18n.language), t, format);
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
						// oxlint-disable-next-line react/no-array-index-key -- nor have their parts
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
