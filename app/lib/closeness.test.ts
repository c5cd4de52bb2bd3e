import { expect, test } from "vitest";
import { editDistance, likeness, nearestName, plainText } from "./closeness.ts";

test("accents, signs and capitals do not tell texts apart", () => {
	expect(plainText("  Doña Ana's  ORCHARD, LLC. ")).toBe("dona anas orchard llc");
});

test.each([
	["", "", 0],
	["kitten", "sitting", 3],
	["jonhson", "johnson", 1],
	["dane", "dane", 0],
	["a", "", 1],
])("from %o to %o it is %i", (a, b, distance) => {
	expect(editDistance(a, b)).toBe(distance);
	expect(editDistance(b, a)).toBe(distance);
});

test("a misspelt name finds the nearest, and one far from all finds none", () => {
	const names = ["Johnson", "Jones", "Jackson", "Jasper"];
	expect(nearestName("Jonhson", names)).toBe("Johnson");
	expect(nearestName("JOHNSTON", names)).toBe("Johnson");
	expect(nearestName("Winnebago", names)).toBeUndefined();
	expect(likeness("abcd", "abce")).toBe(0.75);
});
