import sharp from "sharp";
import {
	brokenPhoto,
	mostPhotoBytes,
	type PhotoProblem,
	photoSide,
	problemOfBytes,
	tooBig,
	tooManyDots,
} from "./photo.ts";

/** A photo as it is kept: two pictures made anew from its dots, so that nothing else of the file comes along. */
export type Picture = { whole: Buffer; small: Buffer; widthPx: number; heightPx: number };

/** Longer side of the small picture, for pages that list photos on one bar of signal. */
const smallSide = 320;
/** More dots than phones take. Some formats are read whole, at four bytes a dot, and few bytes can claim to be many dots. */
const mostDots = 80_000_000;
const mostSeconds = 15;

/**
 * Makes the pictures that are kept of a photo: upright, no larger than needed, and without any metadata. Only what its bytes
 * show to be a photo is read, within limits of dots and time.
 */
export async function readPicture(file: Uint8Array): Promise<Picture | PhotoProblem> {
	if (file.length > mostPhotoBytes) return tooBig;
	const problem = problemOfBytes(file);
	if (problem) return problem;
	return inTurn(() => draw(file));
}

export function isPicture(read: Picture | PhotoProblem): read is Picture {
	return "whole" in read;
}

async function draw(file: Uint8Array): Promise<Picture | PhotoProblem> {
	try {
		const whole = await sharp(file, { limitInputPixels: mostDots, sequentialRead: true, failOn: "error" })
			.timeout({ seconds: mostSeconds })
			.autoOrient()
			.flatten({ background: "#ffffff" })
			.resize({ width: photoSide, height: photoSide, fit: "inside", withoutEnlargement: true })
			.jpeg({ quality: 80 })
			.toBuffer({ resolveWithObject: true });
		const small = await sharp(whole.data)
			.resize({ width: smallSide, height: smallSide, fit: "inside", withoutEnlargement: true })
			.jpeg({ quality: 60 })
			.toBuffer();
		return { whole: whole.data, small, widthPx: whole.info.width, heightPx: whole.info.height };
	} catch (error) {
		return /pixel limit|timeout/i.test(String(error)) ? tooManyDots : brokenPhoto;
	}
}

/** Pictures that are drawn at once in this process; others wait, so that many photos do not take all memory. */
const mostAtOnce = 2;
let drawing = 0;
const waiting: (() => void)[] = [];

async function inTurn<T>(work: () => Promise<T>): Promise<T> {
	// Whoever ends hands its place on, so that nobody who comes in between takes it.
	if (drawing >= mostAtOnce) await new Promise<void>((go) => waiting.push(go));
	else drawing += 1;
	try {
		return await work();
	} finally {
		const next = waiting.shift();
		if (next) next();
		else drawing -= 1;
	}
}
