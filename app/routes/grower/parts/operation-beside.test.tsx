import { createInstance } from "i18next";
import { renderToStaticMarkup } from "react-dom/server";
import { I18nextProvider } from "react-i18next";
import { expect, test } from "vitest";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { OperationBeside } from "./operation-beside.tsx";

type Operation = Parameters<typeof OperationBeside>[0]["operation"];
const words = { en: "Crop loss", es: "Pérdida de cosecha" };
const measure = { key: "crop_loss", label: words, description: words, kind: "ratio", unit: "percent", decimals: 0, season: 2031, worse: "more", hue: "loss" } as const; // prettier-ignore
const cell = { areaKey: "IA-3", areaName: "East Iowa", kind: "district", stateFips: "19", cropKey: "apple", status: "shown", value: 52, lower: 44, upper: 60, quartiles: null, steadiness: "steady", respondentsBand: "20-49" } as const; // prettier-ignore

async function drawn(value: number, more: Partial<Operation> = {}, language = "en"): Promise<string> {
	const i18n = createInstance();
	await i18n.init({ ...i18nextSettings, resources, lng: language });
	const operation: Operation = {
		operationId: "1",
		name: "Plum Hollow",
		countyFips: "19113",
		measures: [measure],
		figures: [{ measureKey: "crop_loss", cropKey: "apple", yesOrNo: false, value }],
		cells: { "crop_loss|apple": cell },
		...more,
	};
	return renderToStaticMarkup(
		<I18nextProvider i18n={i18n}>
			<OperationBeside operation={operation} />
		</I18nextProvider>,
	);
}

test.each([
	[61, "Your figure, 61%, is above that of East Iowa: 52%, likely between 44 and 60%."],
	[60.4, "Your figure, 60%, is about that of East Iowa: 52%, likely between 44 and 60%."],
	[43, "Your figure, 43%, is below that of East Iowa: 52%, likely between 44 and 60%."],
])(
	"an own value of %d is told against the area's likely range, in words and as the drawing's name",
	async (own, said) => {
		const page = await drawn(own);
		expect(page).toContain(`<p class="mt-1 font-bold">${said}</p>`);
		expect(page).toContain(`aria-label="${said}"`);
		expect(await drawn(own, {}, "es")).toContain("(East Iowa): 52%, probablemente entre 44 y 60%.");
	},
);

test("both values are drawn on one scale, the own one's bar as long as it is large", async () => {
	const widths = [...(await drawn(26)).matchAll(/<rect[^>]*width="([\d.]+)"[^>]*class="chart-edge/g)].map(([, width]) => Number(width)); // prettier-ignore
	expect(widths).toHaveLength(2);
	expect(widths[1]! / widths[0]!).toBeCloseTo(2, 1);
});

test("without an area that shows the figure nothing is drawn and nothing is compared", async () => {
	const page = await drawn(61, { cells: {} });
	expect(page).toContain("No area around you shows this figure.");
	expect(page).not.toMatch(/<svg|Your figure/);
});
