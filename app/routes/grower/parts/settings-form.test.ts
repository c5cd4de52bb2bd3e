import { expect, test } from "vitest";
import { parseForm } from "#app/lib/parse-form.ts";
import { SettingsForm } from "./settings-form.ts";

const whole = { contactName: "Ada Quill", email: "", phone: "", language: "en", massUnit: "bu" };
function sent(fields: Record<string, string>) {
	const form = new FormData();
	for (const [name, value] of Object.entries({ ...whole, ...fields })) form.set(name, value);
	return parseForm(SettingsForm, form);
}

test("an empty address or number is none, and a box without a tick is a no", () => {
	expect(sent({})).toMatchObject({
		ok: true,
		value: { contactName: "Ada Quill", email: null, phone: null, language: "en", massUnit: "bu", mailWanted: false },
	});
	expect(sent({ email: " ada@quail.example ", phone: " 555 0100 ", mailWanted: "on" })).toMatchObject({
		ok: true,
		value: { email: "ada@quail.example", phone: "555 0100", mailWanted: true },
	});
});

test.each([
	[{ contactName: "" }, "contactName", "empty"],
	[{ contactName: "   " }, "contactName", "empty"],
	[{ contactName: "x".repeat(201) }, "contactName", "too_long"],
	[{ email: "ada at quail" }, "email", "email_wrong"],
	[{ email: `${"a".repeat(250)}@quail.example` }, "email", "too_long"],
	[{ phone: "5".repeat(41) }, "phone", "too_long"],
	[{ language: "de" }, "language", "choice_wrong"],
	[{ massUnit: "stone" }, "massUnit", "choice_wrong"],
])("%o is told beside its field", (fields, field, code) => {
	const form = sent(fields);
	expect(form.ok ? [] : form.problems).toEqual([{ field, code }]);
	expect(form.values).toMatchObject(Object.fromEntries(Object.entries(fields).filter(([, typed]) => typed !== "")));
});
