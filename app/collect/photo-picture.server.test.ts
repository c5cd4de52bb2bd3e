import { crc32, deflateSync } from "node:zlib";
import exifr from "exifr";
import sharp from "sharp";
import { describe, expect, test } from "vitest";
import { brokenPhoto, mostPhotoBytes, noPhoto, tooBig, tooManyDots } from "./photo.ts";
import { isPicture, type Picture, readPicture } from "./photo-picture.server.ts";

const background = { r: 150, g: 90, b: 40 };
const blank = (width: number, height: number) => sharp({ create: { width, height, channels: 3, background } });

/** A photo as a phone takes it: lying on its side, with where, when and by what it was taken. */
function fromPhone() {
	return blank(2400, 1800)
		.withExif({
			IFD0: { Make: "Invented", Artist: "Ana Rowan" },
			IFD2: { DateTimeOriginal: "2026:05:04 05:30:00" },
			IFD3: { GPSLatitudeRef: "N", GPSLatitude: "42/1 1/1 30/1", GPSLongitudeRef: "W", GPSLongitude: "93/1 37/1 0/1" },
		})
		.withXmp('<x:xmpmeta xmlns:x="adobe:ns:meta/"><note>north block</note></x:xmpmeta>')
		.withMetadata({ orientation: 6 })
		.jpeg()
		.toBuffer();
}

async function pictureOf(file: Uint8Array): Promise<Picture> {
	const read = await readPicture(file);
	if (!isPicture(read)) throw new Error(read.code);
	return read;
}

/** The kinds of segments that a JPEG file is made of, up to its dots. */
function segmentsOf(jpeg: Buffer): string[] {
	const kinds: string[] = [];
	for (let at = 2; jpeg[at] === 0xff && jpeg[at + 1] !== 0xda; at += 2 + jpeg.readUInt16BE(at + 2))
		kinds.push(jpeg[at + 1]!.toString(16));
	return kinds;
}

test("a photo loses where, when and by whom it was taken, and every other word beside its dots", async () => {
	const file = await fromPhone();
	expect(await exifr.gps(file)).toMatchObject({ latitude: expect.closeTo(42.025, 3) });
	expect(segmentsOf(file)).toContain("e1");
	const { whole, small } = await pictureOf(file);
	for (const picture of [whole, small]) {
		expect(await exifr.parse(picture, true).catch(() => undefined)).toBeUndefined();
		// Tables and frame of the picture itself, beside the mark that it is a JPEG: no comment and nothing of an application.
		const kinds = segmentsOf(picture);
		expect(kinds.length).toBeGreaterThan(2);
		expect(kinds.filter((kind) => /^(e[1-9a-f]|fe)$/.test(kind))).toEqual([]);
		expect(picture.includes("Rowan")).toBe(false);
		expect(picture.includes("north block")).toBe(false);
	}
});

test("a photo is turned upright and made no larger than needed, with a small one beside it", async () => {
	const { whole, small, widthPx, heightPx } = await pictureOf(await fromPhone());
	expect([widthPx, heightPx]).toEqual([1200, 1600]);
	expect(await sharp(whole).metadata()).toMatchObject({ format: "jpeg", width: 1200, height: 1600 });
	expect(await sharp(small).metadata()).toMatchObject({ format: "jpeg", width: 240, height: 320 });
	expect(await pictureOf(await blank(300, 200).png().toBuffer())).toMatchObject({ widthPx: 300, heightPx: 200 });
});

function chunk(name: string, data: Buffer): Buffer {
	const body = Buffer.concat([Buffer.from(name), data]);
	const [length, sum] = [Buffer.alloc(4), Buffer.alloc(4)];
	length.writeUInt32BE(data.length);
	sum.writeUInt32BE(crc32(body));
	return Buffer.concat([length, body, sum]);
}

/** A whole and true PNG of black dots, at one bit a dot before they are packed to almost nothing. */
function bomb(side: number): Buffer {
	const header = Buffer.alloc(13);
	header.writeUInt32BE(side, 0);
	header.writeUInt32BE(side, 4);
	header.set([1, 0, 0, 0, 0], 8);
	const rows = deflateSync(Buffer.alloc(side * (1 + side / 8)));
	const signature = Buffer.from("\x89PNG\r\n\x1a\n", "latin1");
	return Buffer.concat([signature, chunk("IHDR", header), chunk("IDAT", rows), chunk("IEND", Buffer.alloc(0))]);
}

describe("what is no photo to keep", () => {
	test("a file of many megabytes", async () => {
		expect(await readPicture(Buffer.alloc(mostPhotoBytes + 1, 0xff))).toEqual(tooBig);
	});
	test("a document, whatever it is called", async () => {
		expect(await readPicture(Buffer.from("%PDF-1.7\n%âãÏÓ\n1 0 obj"))).toEqual(noPhoto);
	});
	test("a small file that would take all memory once unpacked", async () => {
		const file = bomb(16_000);
		expect(file.length).toBeLessThan(100_000);
		expect(await readPicture(file)).toEqual(tooManyDots);
		// As small a file with dots that can be counted is a photo like any other.
		expect(isPicture(await readPicture(bomb(800)))).toBe(true);
	});
	test("a photo that was cut off on its way, and bytes that only begin like one", async () => {
		const file = await fromPhone();
		expect(await readPicture(file.subarray(0, file.length / 2))).toEqual(brokenPhoto);
		expect(await readPicture(Buffer.from("\xff\xd8\xff\xe0 and so on", "latin1"))).toEqual(brokenPhoto);
	});
});

test("many photos at once are drawn one after the other and all come out", async () => {
	const file = await blank(800, 600).jpeg().toBuffer();
	const all = await Promise.all(Array.from({ length: 9 }, () => readPicture(file)));
	expect(all.filter(isPicture).length).toBe(9);
});
