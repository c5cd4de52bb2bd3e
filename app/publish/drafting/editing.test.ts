import { expect, test } from "vitest";
import { applyEdit, EditorForm } from "./editing.ts";

const first = { measure: "crop_loss", crop: "all", area: "network" };
const heading = (id: string) => ({ id, type: "heading" as const, text: { en: id, es: id } });
const form = (intent: string, more: object = {}) =>
	EditorForm.parse({
		title: { en: "T", es: "T" },
		summary: { en: "S", es: "S" },
		blocks: [heading("a"), heading("b"), heading("c")],
		edit: "3",
		intent,
		...more,
	});
const ids = (intent: string, more?: object) => applyEdit(form(intent, more), first).content.blocks.map(({ id }) => id);

test("blocks move one place, and stay at either end", () => {
	expect(ids("up:b")).toEqual(["b", "a", "c"]);
	expect(ids("down:b")).toEqual(["a", "c", "b"]);
	expect(ids("up:a")).toEqual(["a", "b", "c"]);
	expect(ids("down:c")).toEqual(["a", "b", "c"]);
});

test("a removed block is gone and the next one takes its place", () => {
	const { content, at } = applyEdit(form("remove:b"), first);
	expect(content.blocks.map(({ id }) => id)).toEqual(["a", "c"]);
	expect(at).toBe("c");
});

test("a new block has an id of its own and points to a figure of the release", () => {
	const { content, at } = applyEdit(form("add", { add: "figure" }), first);
	expect(content.blocks.at(-1)).toEqual({ id: "b4", type: "figure", ...first });
	expect(at).toBe("b4");
});

test("a picked figure goes to the end of a text in both languages and to no other block", () => {
	const pick = { measure: "crop_loss", crop: "plum", area: "IA-3" };
	const { content } = applyEdit(form("insert:b", { pick }), first);
	expect(content.blocks[1]).toMatchObject({
		text: { en: "b [[crop_loss|plum|IA-3]]", es: "b [[crop_loss|plum|IA-3]]" },
	});
	expect(content.blocks[0]).toEqual(heading("a"));
});

test("a button that the page does not have is refused", () => {
	expect(EditorForm.safeParse({ ...form("save"), intent: "publish" }).success).toBe(false);
});
