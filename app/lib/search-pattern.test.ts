import { expect, test } from "vitest";
import { searchPattern } from "./search-pattern.ts";

test("a name is searched for with and without its accents", () => {
	expect(searchPattern("Peña")).toBe("P[eéèêë][nñ][aáàâäãå]");
	expect(searchPattern("PENA")).toBe(searchPattern("PENÁ"));
});

test("a sign stands for itself alone", () => {
	expect(searchPattern("B.*(1)")).toBe(String.raw`B\.\*\(1\)`);
	expect(searchPattern("x_%\\")).toBe(String.raw`x\_\%\\`);
});
