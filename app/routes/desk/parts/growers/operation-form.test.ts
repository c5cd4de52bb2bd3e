import { expect, test } from "vitest";
import { parseForm } from "#app/lib/parse-form.ts";
import { newOperationForm } from "./operation-form.ts";

const sent = (fields: Record<string, string>) => {
	const form = new FormData();
	const plain = { name: "Sumac Ridge", contactName: "Lena Fairbrook", ownerName: "Fairbrook", countyFips: "19103" };
	for (const [name, value] of Object.entries({ ...plain, language: "es", massUnit: "lb", ...fields }))
		form.set(name, value);
	return parseForm(newOperationForm("en", 2031), form);
};

test("rows of plantings that are left blank are none, and the others keep their places", () => {
	const blank = { "plantings[0].cropKey": "", "plantings[0].bearingTrees": "" };
	const form = sent({ ...blank, "plantings[1].cropKey": "plum", "plantings[1].bearingTrees": "1,200" });
	expect(form).toMatchObject({
		ok: true,
		value: { phone: null, email: null, ownerId: null, plantings: [{ cropKey: "plum", bearingTrees: 1200 }] },
	});
	expect(form.ok && form.value.plantings).toHaveLength(1);
	expect(sent({})).toMatchObject({ ok: true, value: { plantings: [] } });
});

test("what is wrong in a planting is told at its own row, and what was typed comes back", () => {
	const form = sent({ email: "no address", "plantings[1].cropKey": "plum", "plantings[1].bearingTrees": "many" });
	expect(form).toMatchObject({
		ok: false,
		values: { plantings: { 1: { bearingTrees: "many" } } },
		problems: [
			{ field: "email", code: "email_wrong" },
			{ field: "plantings[1].bearingTrees", code: "not_a_number" },
		],
	});
});

test("a planting without its crop asks for it", () => {
	expect(sent({ "plantings[0].bearingTrees": "40" })).toMatchObject({
		ok: false,
		problems: [{ field: "plantings[0].cropKey", code: "choice_wrong" }],
	});
});
