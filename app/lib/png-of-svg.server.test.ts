import sharp from "sharp";
import { expect, test } from "vitest";
import { pngOfSvg } from "./png-of-svg.server.ts";

const drawn = async (text: string, weight = 400) => {
	const letters = `<text x="10" y="40" font-family="Noto Sans" font-size="30" font-weight="${weight}">${text}</text>`;
	const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="400" height="60"><rect width="400" height="60" fill="#fff"/>${letters}</svg>`;
	const { data, info } = await sharp(await pngOfSvg(svg))
		.greyscale()
		.raw()
		.toBuffer({ resolveWithObject: true });
	const dark = [...data].flatMap((value, index) => (value < 128 ? [index] : []));
	const across = dark.map((index) => index % info.width);
	return {
		dots: dark.length,
		width: across.length === 0 ? 0 : Math.max(...across) - Math.min(...across),
		dark: dark.join(),
	};
};

test("letters are drawn in the shipped font, each in its own width and the accents of Spanish over them", async () => {
	const [none, narrow, wide, bold] = await Promise.all([
		drawn(""),
		drawn("iiiii"),
		drawn("WWWWW"),
		drawn("WWWWW", 700),
	]);
	expect(none.dots).toBe(0);
	// Signs that stand for letters which a font lacks are all of one width.
	expect(wide.width).toBeGreaterThan(2.5 * narrow.width);
	expect(bold.dots).toBeGreaterThan(1.2 * wide.dots);
	const letters = await Promise.all([..."nñáaéeóoúuüíıłl"].map((letter) => drawn(letter)));
	expect(new Set(letters.map(({ dark }) => dark)).size).toBe(letters.length);
	expect(letters.every(({ dots }) => dots > 0)).toBe(true);
});

test("drawing leaves no setting behind for the programs that the server starts", async () => {
	await drawn("a");
	expect(process.env).not.toHaveProperty("FONTCONFIG_FILE");
});
