import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { inflateSync } from "node:zlib";

/** The page's own letters in the two weights that pictures have, with the accents of both languages and of names. */
const files = ["latin-400", "latin-700", "latin-ext-400", "latin-ext-700"];

let folder: string | undefined;

/**
 * Lets pictures be drawn with the fonts that ship with the product: a server may have none, or others. What draws letters
 * reads its fonts from a folder that its first drawing learns of from the environment, so this comes before it.
 */
export function usePictureFonts(): void {
	if (folder !== undefined) return;
	const made = mkdtempSync(join(tmpdir(), "tallygrove-fonts-"));
	process.once("exit", () => rmSync(made, { recursive: true, force: true }));
	folder = made;
	mkdirSync(join(folder, "fonts"));
	const { resolve } = createRequire(import.meta.url);
	for (const file of files) {
		const woff = readFileSync(resolve(`@fontsource/noto-sans/files/noto-sans-${file}-normal.woff`));
		writeFileSync(join(folder, "fonts", `${file}.ttf`), sfntOf(woff));
	}
	const settings = `<?xml version="1.0"?><!DOCTYPE fontconfig SYSTEM "fonts.dtd">
<fontconfig><dir>${join(folder, "fonts")}</dir><cachedir>${join(folder, "cache")}</cachedir></fontconfig>`;
	writeFileSync(join(folder, "fonts.conf"), settings);
	process.env.FONTCONFIG_FILE = join(folder, "fonts.conf");
}

/** Once something was drawn the setting has been read, and what this process starts (a browser that prints) needs its own. */
export function forgetPictureFonts(): void {
	delete process.env.FONTCONFIG_FILE;
}

type Table = { tag: Buffer; checksum: number; data: Uint8Array };

/**
 * Unpacks a web font into the form that drawing takes (W3C, WOFF File Format 1.0, sections 3 to 5): the same tables, each
 * inflated, behind the header of an OpenType file.
 */
export function sfntOf(woff: Buffer): Buffer {
	const count = woff.readUInt16BE(12);
	const tables = Array.from({ length: count }, (_, index): Table => {
		const entry = 44 + 20 * index;
		const [offset, packed, length] = [4, 8, 12].map((at) => woff.readUInt32BE(entry + at)) as [number, number, number];
		const stored = woff.subarray(offset, offset + packed);
		const data = packed < length ? inflateSync(stored) : stored;
		return { tag: woff.subarray(entry, entry + 4), checksum: woff.readUInt32BE(entry + 16), data };
	});
	const header = Buffer.alloc(12 + 16 * count);
	const power = 2 ** Math.floor(Math.log2(count));
	header.writeUInt32BE(woff.readUInt32BE(4), 0);
	for (const [index, value] of [count, power * 16, Math.log2(power), (count - power) * 16].entries())
		header.writeUInt16BE(value, 4 + 2 * index);
	const parts: Uint8Array[] = [header];
	let offset = header.length;
	for (const [index, { tag, checksum, data }] of tables.entries()) {
		const entry = 12 + 16 * index;
		tag.copy(header, entry);
		for (const [at, value] of [checksum, offset, data.length].entries())
			header.writeUInt32BE(value, entry + 4 + 4 * at);
		const padding = Buffer.alloc((4 - (data.length % 4)) % 4);
		parts.push(data, padding);
		offset += data.length + padding.length;
	}
	return Buffer.concat(parts);
}
