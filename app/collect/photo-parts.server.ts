import { constants } from "node:fs";
import { mkdir, open, readdir, readFile, rm, stat } from "node:fs/promises";
import { join } from "node:path";
import { ifAbsent } from "./photo-files.server.ts";

/*
 * Photos on their way, as far as they have come: `incoming/<response>/<photo>`, each piece at its place. A piece that comes
 * twice is written over by the same, so that a phone which was cut off may send what it is not sure of again.
 */
export type PartOf = { responseId: string; photoId: string };

/** Photos of one response that may be on their way at once, with some that were given up. */
const mostParts = 12;

const folderOf = (folder: string, responseId: string) => join(folder, "incoming", responseId);
const pathOf = (folder: string, { responseId, photoId }: PartOf) => join(folderOf(folder, responseId), photoId);

/**
 * Puts a piece at its place.
 * @returns how many bytes are here now; fewer than the piece's place where pieces before it are missing, which then was not
 *   written. Undefined where too many photos of the response are on their way.
 */
export async function putPart(folder: string, part: PartOf, offset: number, piece: Uint8Array) {
	await mkdir(folderOf(folder, part.responseId), { recursive: true, mode: 0o700 });
	const held = await sizeOf(folder, part);
	if (held === undefined && (await readdir(folderOf(folder, part.responseId))).length >= mostParts) return undefined;
	if (offset > (held ?? 0)) return held ?? 0;
	const handle = await open(pathOf(folder, part), constants.O_RDWR | constants.O_CREAT, 0o600);
	try {
		await handle.write(piece, 0, piece.length, offset);
		return Math.max(held ?? 0, offset + piece.length);
	} finally {
		await handle.close();
	}
}

export async function readParts(folder: string, part: PartOf): Promise<Buffer | undefined> {
	return readFile(pathOf(folder, part)).catch(ifAbsent);
}

export async function dropParts(folder: string, part: PartOf): Promise<void> {
	await rm(pathOf(folder, part), { force: true });
}

/** Drops what has not come on for a while. The phone begins such a photo anew. */
export async function dropOldParts(folder: string, untouchedMs: number): Promise<number> {
	let dropped = 0;
	for (const responseId of (await readdir(join(folder, "incoming")).catch(ifAbsent)) ?? []) {
		for (const photoId of (await readdir(folderOf(folder, responseId)).catch(ifAbsent)) ?? []) {
			const found = await stat(pathOf(folder, { responseId, photoId })).catch(ifAbsent);
			if (!found || Date.now() - found.mtimeMs <= untouchedMs) continue;
			await dropParts(folder, { responseId, photoId });
			dropped += 1;
		}
	}
	return dropped;
}

async function sizeOf(folder: string, part: PartOf): Promise<number | undefined> {
	return (await stat(pathOf(folder, part)).catch(ifAbsent))?.size;
}
