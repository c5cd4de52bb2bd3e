import sharp from "sharp";
import { forgetPictureFonts, usePictureFonts } from "./picture-fonts.server.ts";

/** Dots for each unit of a drawing: sharp on a slide and in print. */
const density = 2 * 72;

/** Draws an SVG as PNG, with the product's own fonts. One at a time: a drawing takes a whole processor. */
export function pngOfSvg(svg: string): Promise<Buffer> {
	const drawn = last.then(async () => {
		usePictureFonts();
		try {
			return await sharp(Buffer.from(svg), { density }).png({ compressionLevel: 9 }).toBuffer();
		} finally {
			forgetPictureFonts();
		}
	});
	last = drawn.catch(() => undefined);
	return drawn;
}

let last: Promise<unknown> = Promise.resolve();
