import { expect, test } from "vitest";
import { parseForm } from "#app/lib/parse-form.ts";
import { PlaceForm, readDegrees } from "./place-form.ts";

test.each([
	["42.0308", "latitude", 42.0308],
	["42,0308", "latitude", 42.0308],
	[" 42.0308° N ", "latitude", 42.0308],
	["-93.6319", "longitude", -93.6319],
	["−93.631", "longitude", -93.631],
	["93.6319 W", "longitude", -93.6319],
	["93.6319° O", "longitude", -93.6319],
	["-93.6 w", "longitude", -93.6],
	["93", "longitude", 93],
	["91", "latitude", null],
	["181", "longitude", null],
	["42.03 W", "latitude", null],
	["-42.03 N", "latitude", null],
	["42.03.1", "latitude", null],
	["", "latitude", null],
	["north", "latitude", null],
	["1e2", "longitude", null],
] as const)("%o as a %s is %s", (typed, kind, degrees) => {
	expect(readDegrees(typed, kind)).toBe(degrees);
});

function sent(fields: Record<string, string>) {
	const form = new FormData();
	for (const [name, value] of Object.entries(fields)) form.set(name, value);
	return parseForm(PlaceForm, form);
}

test("both numbers of a pin are told when both need mending, and what was typed comes back", () => {
	const fields = { step: "pin", latitude: "up", longitude: "200" };
	expect(sent(fields)).toEqual({
		ok: false,
		values: fields,
		problems: [
			{ field: "latitude", code: "latitude_wrong" },
			{ field: "longitude", code: "longitude_wrong" },
		],
	});
});

test("only the confirming button's own word confirms", () => {
	const pin = { step: "pin", latitude: "42.03", longitude: "-93.63" };
	expect(sent(pin)).toMatchObject({ ok: true, value: { latitude: 42.03, longitude: -93.63 } });
	expect(sent({ ...pin, confirmed: "no" })).not.toMatchObject({ value: { confirmed: "yes" } });
	expect(sent({ ...pin, confirmed: "yes" })).toMatchObject({ value: { confirmed: "yes" } });
});
