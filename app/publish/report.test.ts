import { expect, test } from "vitest";
import { missingWords, partsOf, referencesOf, slugOf, tooLongWords, typedFigures } from "./report.ts";

const words = { en: "Title", es: "Título" };

test("a text is taken apart at its references and nothing of it is lost", () => {
	expect(partsOf("Lost [[crop_loss|apple|network]] in all.")).toEqual([
		{ kind: "text", text: "Lost " },
		{ kind: "reference", reference: { measure: "crop_loss", crop: "apple", area: "network" } },
		{ kind: "text", text: " in all." },
	]);
	expect(partsOf("[[crop_loss|apple]] is no reference")).toEqual([
		{ kind: "text", text: "[[crop_loss|apple]] is no reference" },
	]);
});

test("figures typed by hand are found in both languages; references, years and counts are not", () => {
	expect(typedFigures("We lost 38% and 1,200 lb of it")).toEqual(["38%", "1,200 lb"]);
	expect(typedFigures("Se perdió el 38 por ciento, 900 libras")).toEqual(["38 por ciento", "900 libras"]);
	expect(typedFigures("In 2025, [[crop_loss|apple|IA-3]] in 3 counties")).toEqual([]);
});

test("every reference is listed, from texts of both languages and from figure blocks", () => {
	const text = { en: "[[a|apple|19]]", es: "[[b|apple|19]]" };
	const figure = { id: "b2", type: "figure" as const, measure: "c", crop: "plum", area: "network" };
	const listed = referencesOf({ title: words, summary: words, blocks: [{ id: "b1", type: "text", text }, figure] });
	expect(listed.map(({ measure }) => measure)).toEqual(["a", "b", "c"]);
});

test("a report without Spanish or without blocks cannot be handed in, and the fields are named", () => {
	const text = { en: "English only", es: " " };
	expect(missingWords({ title: words, summary: words, blocks: [] })).toEqual([{ field: "blocks", code: "empty" }]);
	expect(missingWords({ title: words, summary: words, blocks: [{ id: "b1", type: "text", text }] })).toEqual([
		{ field: "blocks[0].text.es", code: "empty" },
	]);
});

test("two megabytes of text are named as too long", () => {
	const title = { en: "x".repeat(2_000_000), es: "y" };
	expect(tooLongWords({ title, summary: words, blocks: [] })).toEqual([{ field: "title.en", code: "too_long" }]);
});

test("an address is made of a title's plain letters", () => {
	expect(slugOf("Crop report 2025: Año difícil!")).toBe("crop-report-2025-ano-dificil");
	expect(slugOf("¿¡…")).toBe("report");
});
