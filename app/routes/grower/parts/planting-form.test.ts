import { expect, test } from "vitest";
import { parseForm } from "#app/lib/parse-form.ts";
import { newPlantingForm, plantingForm } from "./planting-form.ts";

const sent = (fields: Record<string, string>) => {
	const form = new FormData();
	for (const [name, value] of Object.entries(fields)) form.set(name, value);
	return form;
};
const added = (fields: Record<string, string>, language = "en") =>
	parseForm(newPlantingForm(language, 2031), sent({ cropKey: "apple", bearingTrees: "40", ...fields }));
const mended = (fields: Record<string, string>, language = "en") => {
	const form = added(fields, language);
	return form.ok ? [] : form.problems;
};

test("a planting is read as growers type it", () => {
	const form = added({
		cultivar: "  Amber Dot ",
		bearingTrees: "1,200 trees",
		youngTrees: "15",
		areaAcres: "2.5 ac",
		plantedYear: " 2012 ",
	});
	expect(form).toMatchObject({
		ok: true,
		value: {
			cropKey: "apple",
			cultivar: "Amber Dot",
			bearingTrees: 1200,
			youngTrees: 15,
			areaAcres: 2.5,
			plantedYear: 2012,
		},
	});
});

test("what is left blank is not known, and blank young plants are none", () => {
	expect(added({ youngTrees: "", areaAcres: "", plantedYear: "", cultivar: "" })).toMatchObject({
		ok: true,
		value: { cultivar: "", bearingTrees: 40, youngTrees: 0, areaAcres: null, plantedYear: null },
	});
});

test("an area in hectares becomes acres, and a decimal comma is read in Spanish", () => {
	const form = added({ areaAcres: "1,5 ha" }, "es");
	expect(form.ok && form.value.areaAcres).toBeCloseTo(3.7066, 4);
});

test.each([
	[{ bearingTrees: "" }, "bearingTrees", "empty"],
	[{ bearingTrees: "-4" }, "bearingTrees", "negative"],
	[{ bearingTrees: "4.5" }, "bearingTrees", "not_whole"],
	[{ bearingTrees: "1.234" }, "bearingTrees", "ambiguous_number"],
	[{ bearingTrees: "40 lb" }, "bearingTrees", "unit_unknown"],
	[{ bearingTrees: "forty" }, "bearingTrees", "not_a_number"],
	[{ bearingTrees: "0" }, "bearingTrees", "no_plants"],
	[{ areaAcres: "0" }, "areaAcres", "not_nothing"],
	[{ areaAcres: "3 lb" }, "areaAcres", "unit_unknown"],
	[{ plantedYear: "12" }, "plantedYear", "season_wrong"],
	[{ plantedYear: "1412" }, "plantedYear", "season_wrong"],
	[{ plantedYear: "2032" }, "plantedYear", "date_in_future"],
	[{ cropKey: "banana" }, "cropKey", "choice_wrong"],
])("%o is told beside its field", (fields, field, code) => {
	expect(mended(fields)).toEqual([{ field, code }]);
});

test("a limit is told with its number, and every field that needs mending at once", () => {
	expect(mended({ bearingTrees: "2000001", areaAcres: "100001" })).toEqual([
		{ field: "bearingTrees", code: "too_large_limit", detail: { max: 1_000_000 } },
		{ field: "areaAcres", code: "too_large_limit", detail: { max: 100_000 } },
	]);
	expect(mended({ cultivar: "x".repeat(101) })).toEqual([
		{ field: "cultivar", code: "too_long_limit", detail: { max: 100 } },
	]);
});

test("what was typed comes back whole", () => {
	const fields = { cropKey: "apple", cultivar: "Amber Dot", bearingTrees: "forty", areaAcres: "2 ac" };
	const form = added(fields);
	expect(form.ok || form.values).toEqual(fields);
});

test("the two parts of a split are read apart, each with problems of its own", () => {
	const form = parseForm(
		plantingForm("en", "2031-08-01"),
		sent({ step: "split", "first.bearingTrees": "30", "second.bearingTrees": "x" }),
	);
	expect(form).toMatchObject({ ok: false, problems: [{ field: "second.bearingTrees", code: "not_a_number" }] });
});

test.each([
	["2031-08-01", null],
	["2031-08-02", "date_in_future"],
	["2031-02-30", "date_wrong"],
	["1849-12-31", "date_wrong"],
	["", "empty"],
])("pulled out on %s: %s", (removedOn, code) => {
	const form = parseForm(plantingForm("en", "2031-08-01"), sent({ step: "pull_out", removedOn }));
	expect(form.ok ? null : form.problems[0]?.code).toBe(code);
});
