import { createInstance } from "i18next";
import { expect, test } from "vitest";
import { resources } from "#app/i18n/resources.ts";
import { i18nextSettings } from "#app/i18n/settings.ts";
import { figureWords } from "./figure-words.ts";
import { formatterFor } from "./format.ts";

const words = createInstance();
await words.init({ ...i18nextSettings, resources, lng: "en" });
const format = formatterFor("en", words.t);
const said = (figure: Parameters<typeof figureWords>[0]) => figureWords(figure, words.t, format);
const measure = { unit: "percent", decimals: 0, season: 2031 } as const;
const cell = { status: "shown", value: 40, lower: 31, upper: 52, steadiness: "care" } as const;
const alone = { ...cell, lower: null, upper: null };

test("a figure is told with its likely range, or with the words that it has none", () => {
	expect(said({ measure, cell })).toBe("40% (likely 31 to 52%; use with care)");
	expect(said({ measure, cell: alone })).toBe("40% (how far it may be off is not known; use with care)");
	const earlier = { of: "last" as const, seasons: [2030] };
	expect(said({ measure, cell, earlier })).toBe("40% in 2030 (likely 31 to 52%)");
	expect(said({ measure, cell: alone, earlier })).toBe("40% in 2030 (how far it may be off is not known)");
});
