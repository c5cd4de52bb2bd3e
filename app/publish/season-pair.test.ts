import { expect, test } from "vitest";
import type { MapCell } from "./cell.ts";
import { type Compared, differencesOf, orderSeasonRows, pairRows, type SeasonOrder } from "./season-pair.ts";

const cell = (areaKey: string, look: MapCell["look"], value: number | null = null): MapCell => ({
	areaKey,
	areaName: `Area ${areaKey}`,
	kind: "county",
	stateFips: "19",
	status: look === "withheld" || look === "no_growers" ? look : "shown",
	look,
	classIndex: null,
	value,
	lower: null,
	upper: null,
	quartiles: null,
	steadiness: look === "number" ? "steady" : look === "rough" ? "rough" : null,
	respondentsBand: null,
});
const rows = pairRows(
	[cell("a", "number", 30.46), cell("b", "number", 10), cell("c", "withheld"), cell("d", "number", 5)],
	[cell("a", "number", 20.44), cell("b", "withheld"), cell("c", "number", 50), cell("e", "number", 1)],
	1,
);
const keysBy = (key: SeasonOrder["key"], direction: SeasonOrder["direction"] = "asc") =>
	orderSeasonRows(rows, { key, direction }, (a, b) => a.localeCompare(b)).map(({ areaKey }) => areaKey);

test("a change stands only where both seasons show a number, and is that of the two figures as read", () => {
	expect(rows.map(({ areaKey, change }) => [areaKey, change])).toEqual([
		["a", -10.1],
		["b", null],
		["c", null],
		["d", null],
		["e", null],
	]);
	expect(rows.find(({ areaKey }) => areaKey === "e")).toMatchObject({ earlier: null, later: { value: 1 } });
});

test("areas without a number come last whichever way the table is sorted", () => {
	expect(keysBy("area", "desc")).toEqual(["e", "d", "c", "b", "a"]);
	expect(keysBy("value")).toEqual(["e", "a", "c", "d", "b"]);
	expect(keysBy("value", "desc")).toEqual(["c", "a", "e", "d", "b"]);
	expect(keysBy("earlier")).toEqual(["d", "b", "a", "e", "c"]);
	expect(keysBy("change", "desc")).toEqual(["a", "b", "c", "d", "e"]);
});

test("what differs between two seasons is named, and nothing where all is the same", () => {
	const words = { en: "Loss", es: "Pérdida" };
	const one: Compared = {
		release: { formKey: "after_harvest", rules: { minimumOwners: 5, steadyCv: 0.15 } },
		measure: { kind: "ratio", label: words, description: words },
		areaOfCounty: { "19103": "IA-1", "19113": "IA-1" },
	};
	const reordered = { ...one, release: { ...one.release, rules: { steadyCv: 0.15, minimumOwners: 5 } } };
	expect(differencesOf(one, reordered)).toEqual([]);
	expect(differencesOf(one, { ...one, areaOfCounty: { "19103": "IA-2", "19113": "IA-1" } })).toEqual(["districts"]);
	expect(differencesOf(one, { ...one, areaOfCounty: { "19103": "IA-1" } })).toEqual(["counties"]);
	const other: Compared = {
		...one,
		release: { formKey: "bloom", rules: { minimumOwners: 6, steadyCv: 0.15 } },
		measure: { ...one.measure, label: { ...words, en: "Crop loss" } },
	};
	expect(differencesOf(one, other)).toEqual(["form", "wording", "rules"]);
});
