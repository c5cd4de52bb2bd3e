import { expect, test } from "vitest";
import { bibtex, ris } from "./citation.ts";

const cited = {
	network: "Four Rivers & Sons_Network",
	title: "After 100% harvest {early}",
	season: 2025,
	number: 3,
	publishedAt: "2025-10-09T15:00:00.000Z",
	address: "https://survey.example/data/3",
};

test("BibTeX keeps the network whole and its own signs out of the text", () => {
	const text = bibtex(cited);
	expect(text).toMatch(/^@misc\{tallygrove-release-3,\n/);
	expect(text).toContain("author = {{Four Rivers \\& Sons\\_Network}}");
	expect(text).toContain("title = {{After 100\\% harvest \\{early\\}, 2025}}");
	expect(text).toContain("year = {2025}");
	// Every brace that opens closes, escaped ones apart.
	const braces = text.replace(/\\[{}]/g, "").replace(/[^{}]/g, "");
	expect([...braces].filter((sign) => sign === "{").length).toBe(braces.length / 2);
});

test("RIS has its type first and its end last, a tag of two letters on each line", () => {
	const lines = ris(cited).split("\r\n");
	expect(lines[0]).toBe("TY  - DATA");
	expect(lines.at(-2)).toBe("ER  - ");
	expect(lines.slice(0, -1).every((line) => /^[A-Z][A-Z0-9] {2}- /.test(line))).toBe(true);
	expect(lines).toContain("DA  - 2025/10/09");
});
