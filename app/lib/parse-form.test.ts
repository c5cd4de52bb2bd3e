import { expect, test } from "vitest";
import { z } from "zod";
import { parseForm, parseRest } from "./parse-form.ts";

test("a text is read without the character that no database keeps, in nested boxes too", () => {
	const form = new FormData();
	form.set("note", "a\0b");
	form.set("rows[0].na\0me", "c\0");
	const schema = z.object({ note: z.string(), rows: z.array(z.object({ name: z.string() })) });
	const read = { note: "ab", rows: [{ name: "c" }] };
	expect(parseForm(schema, form)).toEqual({ ok: true, value: read, values: read });
});

test("what is right in a form is read beside what is wrong in it", () => {
	const form = new FormData();
	form.set("season", "soon");
	form.append("crops", "plum");
	form.set("title", "");
	const schema = z.object({
		season: z.coerce.number({ error: "season_wrong" }),
		crops: z.array(z.string()),
		title: z.string().optional(),
	});
	const sent = parseForm(schema, form);
	const problems = sent.ok ? [] : sent.problems;
	expect(problems).toEqual([{ field: "season", code: "season_wrong" }]);
	expect(parseRest(schema, form, problems)).toEqual({ crops: ["plum"] });
});
