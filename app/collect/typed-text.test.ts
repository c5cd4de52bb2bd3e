import { expect, test } from "vitest";
import { cleanText, lengthOf } from "./typed-text.ts";

test.each([
	["  two\r\nlines\rand a\ttab \n", "two\nlines\nand a\ttab"],
	["a\u0000b\u0007c\u007f\u0085d", "abcd"],
	["cafe\u0301", "caf\u00e9"],
	["half \ud83c of a pair", "half \ufffd of a pair"],
	["whole \u{1f34e} pair", "whole \u{1f34e} pair"],
	["<b>40</b> & more", "<b>40</b> & more"],
	[" \u0000 ", ""],
])("%j is kept as %j", (typed, kept) => expect(cleanText(typed)).toBe(kept));

test("a text cleaned twice is the text cleaned once", () => {
	const once = cleanText("\u0000 \ud83c a\r\r\n\u0301 ");
	expect(cleanText(once)).toBe(once);
});

test("an emoji is one character long", () => expect(lengthOf("\u{1f34e}\u00e9a")).toBe(3));
