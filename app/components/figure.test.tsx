import { createInstance } from "i18next";
import { renderToStaticMarkup } from "react-dom/server";
import { I18nextProvider, initReactI18next } from "react-i18next";
import { expect, test } from "vitest";
import type { Language } from "#app/i18n/language.ts";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { Figure, type FigureProps } from "./figure.tsx";

const loss: FigureProps = {
	status: "shown",
	value: 62,
	lower: 57,
	upper: 67,
	measure: { unit: "percent", decimals: 0, season: 2024 },
};

/** What a reader of the language sees, without the markup. */
async function seen(language: Language, figure: FigureProps): Promise<string> {
	const i18n = createInstance();
	await i18n.use(initReactI18next).init({ ...i18nextSettings, resources, lng: language });
	const markup = renderToStaticMarkup(
		<I18nextProvider i18n={i18n}>
			<Figure {...figure} />
		</I18nextProvider>,
	);
	return markup
		.replace(/<[^>]+>/g, "|")
		.replace(/\|+/g, "|")
		.replaceAll("\u00a0", " ");
}

test("a headline says its likely range as a sentence, and a cell as a range", async () => {
	expect(await seen("en", { ...loss, size: "headline" })).toBe("|62%|Likely between 57 and 67%|");
	expect(await seen("es", { ...loss, size: "headline" })).toBe("|62%|Probablemente entre 57 y 67%|");
	expect(await seen("en", loss)).toBe("|62%|57 to 67%|");
	expect(await seen("es", loss)).toBe("|62%|57 a 67%|");
});

test("a withheld figure shows its one word and never a number", async () => {
	expect(await seen("en", { ...loss, status: "withheld" })).toBe("|Withheld|");
	expect(await seen("es", { ...loss, status: "withheld" })).toBe("|Confidencial|");
});

const bloom: FigureProps = {
	status: "shown",
	value: 115,
	lower: 113,
	upper: 122,
	quartiles: { first: 112, third: 121 },
	measure: { unit: "day", decimals: 0, season: 2024 },
};

test("a day of the year is a date of its season, never a number", async () => {
	expect(await seen("en", bloom)).toBe("|April 24|April 22 to May 1|Half of the growers: April 21 to April 30|");
	expect(await seen("es", bloom)).toBe(
		"|24 de abril|del 22 de abril al 1 de mayo|La mitad de los productores: del 21 de abril al 30 de abril|",
	);
	const common = { ...bloom, measure: { ...bloom.measure, season: 2025 } };
	expect(await seen("en", common)).toContain("|April 25|April 23 to May 2|");
	expect(await seen("en", { ...bloom, size: "headline" })).toContain("|Likely between April 22 and May 1|");
	expect(await seen("es", { ...bloom, size: "headline" })).toContain(
		"|Probablemente entre el 22 de abril y el 1 de mayo|",
	);
});

test("of a withheld day no date is left", async () => {
	expect(await seen("en", { ...bloom, status: "withheld" })).toBe("|Withheld|");
});
