import { describe, expect, test } from "vitest";
import { noPhoto, photoOfPhone, problemOfBytes } from "./photo.ts";

const bytes = (text: string) => Uint8Array.from(text, (sign) => sign.charCodeAt(0));

describe("what a file is", () => {
	test.each([
		["a JPEG", "\xff\xd8\xff\xe0\x00\x10JFIF"],
		["a PNG", "\x89PNG\r\n\x1a\n\x00\x00\x00\rIHDR"],
		["a WebP", "RIFF\x24\x00\x00\x00WEBPVP8 "],
	])("%s is a photo", (_name, first) => {
		expect(problemOfBytes(bytes(first))).toBeUndefined();
	});

	test.each([
		["a PDF", "%PDF-1.7\n"],
		["a drawing", '<svg xmlns="http://www.w3.org/2000/svg">'],
		["a page", "<!doctype html><script>"],
		["a moving picture", "GIF89a"],
		["a sound", "RIFF\x24\x00\x00\x00WAVEfmt "],
		["a film", "\x00\x00\x00\x20ftypisom"],
		["nothing", ""],
		["the beginning of a JPEG", "\xff\xd8"],
	])("%s is none, whatever its name says", (_name, first) => {
		expect(problemOfBytes(bytes(first))).toEqual(noPhoto);
	});

	test.each(["heic", "heix", "mif1"])(
		"a phone's own format (%s) is told apart, since its owner can mend that",
		(brand) => {
			expect(problemOfBytes(bytes(`\x00\x00\x00\x18ftyp${brand}`))).toEqual(photoOfPhone);
		},
	);
});
