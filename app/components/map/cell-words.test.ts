import { createInstance } from "i18next";
import { createElement } from "react";
import { renderToStaticMarkup } from "react-dom/server";
import { I18nextProvider } from "react-i18next";
import { expect, test, vi } from "vitest";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { useAreaName } from "./area-name.ts";
import { useCellWords } from "./cell-words.ts";
import type { DrawnCell } from "./map-data.ts";

const measure = { unit: "percent", decimals: 0, season: 2031 } as const;
const shown = { look: "number", steadiness: "care", respondentsBand: "5-9", classIndex: 0 } as const;
const counties = Array.from({ length: 3000 }, (_, index) => ({
	areaName: `$& ${index}`,
	kind: "county",
	areaKey: index % 2 ? "19001" : "29001",
	cell: { ...shown, areaKey: `${index}`, value: index % 100, lower: index % 90, upper: index % 100 } as DrawnCell,
}));

async function saidIn(language: string) {
	const words = createInstance();
	await words.init({ ...i18nextSettings, resources, lng: language });
	const looked = vi.spyOn(words, "t");
	const said: string[] = [];
	const Sentences = () => {
		const [areaName, cellWords] = [useAreaName(), useCellWords(measure)];
		said.push(...counties.map((county) => cellWords(areaName(county), county.cell)));
		return null;
	};
	renderToStaticMarkup(createElement(I18nextProvider, { i18n: words }, createElement(Sentences)));
	return { said, lookedUp: looked.mock.calls.length };
}

test("thousands of counties are told in sentences that are looked up once, not for each county", async () => {
	const { said, lookedUp } = await saidIn("en");
	expect(said[1999]).toBe("$& 1999 County, Iowa: 99%, likely between 19 and 99%, use with care. 5–9 growers answered.");
	expect(new Set(said).size).toBe(3000);
	expect(lookedUp).toBeLessThan(100);
	expect((await saidIn("es")).said[1999]).toMatch(/Iowa.*99.*19.*99/);
});

test("what is no county is called what it is there, in both languages", async () => {
	for (const [index, areaKey] of ["22071", "51770", "11001"].entries()) counties[index]!.areaKey = areaKey;
	const [en, es] = [(await saidIn("en")).said, (await saidIn("es")).said];
	expect([en[0], en[1], en[2]].map((said) => said?.split(":")[0])).toEqual([
		"$& 0 Parish, Louisiana",
		"$& 1 City, Virginia",
		"$& 2",
	]);
	expect([es[0], es[1]].map((said) => said?.split(":")[0])).toEqual([
		"Parroquia de $& 0, Luisiana",
		"Ciudad de $& 1, Virginia",
	]);
});

test("a figure without a likely range is told as such, in both languages", async () => {
	const county = counties[9]!;
	Object.assign(county.cell, { lower: null, upper: null });
	expect((await saidIn("en")).said[9]).toBe(
		"$& 9 County, Iowa: 9%; how far it may be off is not known; use with care. 5–9 growers answered.",
	);
	expect((await saidIn("es")).said[9]).toContain("no se sabe cuánto puede variar");
});
