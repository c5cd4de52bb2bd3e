import { expect, test } from "vitest";
import {
	missingWords,
	partsOf,
	referencesOf,
	referenceText,
	slugOf,
	tooLongWords,
	typedFigures,
	typedIn,
} from "./report.ts";

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

test("numbers typed by hand are found in both languages; references, years, lists and addresses are not", () => {
	expect(typedFigures("We lost 38% and 1,200 lb of it in 3 counties")).toEqual(["38%", "1,200 lb", "3"]);
	expect(typedFigures("Se perdió el 38 por ciento, 900 libras, a -2.5 °C")).toEqual([
		"38 por ciento",
		"900 libras",
		"-2.5 °C",
	]);
	expect(typedFigures("Bloom began on April 24, 2025.")).toEqual(["24"]);
	expect(typedFigures("In 2025, [[crop_loss|apple|IA-3]] and [[crop_loss|apple|19|mean]] in IA-3")).toEqual([]);
	expect(typedFigures("1. First\n2) Second [here](https://x.example/38%) https://y.example/7")).toEqual([]);
});

test("a reference can point to the season before or the mean of seasons, and is written back as it was", () => {
	for (const text of ["[[crop_loss|apple|network]]", "[[crop_loss|apple|IA-3|last]]", "[[crop_loss|apple|19|mean]]"]) {
		const part = partsOf(text)[0];
		expect(part?.kind === "reference" && referenceText(part.reference)).toBe(text);
	}
	expect(partsOf("[[crop_loss|apple|19|next]]")[0]?.kind).toBe("text");
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

const inEnglish = (en: string) => ({ en, es: "Nada" });

test("numbers typed anywhere in a report are told once each, in a correction's words too", () => {
	const blocks = [{ id: "b1", type: "text" as const, text: inEnglish("38% in 2025, and 38% again") }];
	const content = { title: inEnglish("IA-3"), summary: inEnglish("[[crop_loss|apple|network]]"), blocks };
	expect(typedIn(content, null)).toEqual(["38%"]);
	expect(typedIn(content, inEnglish("12 counties"))).toEqual(["12", "38%"]);
});
