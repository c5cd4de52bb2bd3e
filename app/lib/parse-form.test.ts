import { expect, test } from "vitest";
import { z } from "zod";
import { parseForm } from "./parse-form.ts";

test("a text is read without the character that no database keeps, in nested boxes too", () => {
	const form = new FormData();
	form.set("note", "a\0b");
	form.set("rows[0].na\0me", "c\0");
	const schema = z.object({ note: z.string(), rows: z.array(z.object({ name: z.string() })) });
	const read = { note: "ab", rows: [{ name: "c" }] };
	expect(parseForm(schema, form)).toEqual({ ok: true, value: read, values: read });
});
