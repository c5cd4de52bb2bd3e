import { randomBytes } from "node:crypto";
import { mkdir, open, readdir, readFile, rename, rm, stat, unlink } from "node:fs/promises";
import { join } from "node:path";
import type { Picture } from "./photo-picture.server.ts";

/*
 * The files of photos, in a folder that no web server serves. A photo's name is random and stands only in `collect.photo`;
 * its two pictures are `<name>.jpg` and `<name>-small.jpg`.
 */
export type PhotoSize = "whole" | "small";

const fileOf = (name: string, size: PhotoSize) => `${name}${size === "small" ? "-small" : ""}.jpg`;

/** Writes both pictures and comes back when they are on the disk. @returns their name. */
export async function writePhoto(folder: string, { whole, small }: Pick<Picture, "whole" | "small">): Promise<string> {
	await mkdir(folder, { recursive: true, mode: 0o700 });
	const name = randomBytes(16).toString("hex");
	try {
		await writeWhole(folder, fileOf(name, "whole"), whole);
		await writeWhole(folder, fileOf(name, "small"), small);
		await syncFolder(folder);
	} catch (error) {
		await erasePhoto(folder, name);
		throw error;
	}
	return name;
}

/** @returns undefined where the file is not there. */
export async function readPhoto(folder: string, name: string, size: PhotoSize): Promise<Buffer | undefined> {
	return readFile(join(folder, fileOf(name, size))).catch(ifAbsent);
}

/** Erases both pictures; again changes nothing. */
export async function erasePhoto(folder: string, name: string): Promise<void> {
	for (const size of ["whole", "small"] as const) await unlink(join(folder, fileOf(name, size))).catch(ifAbsent);
}

/** Names of photos whose files have not been touched for a while. */
export async function listPhotoFiles(folder: string, untouchedMs: number): Promise<string[]> {
	const files = (await readdir(folder).catch(ifAbsent)) ?? [];
	const names = new Set<string>();
	for (const file of files) {
		const name = /^([0-9a-f]{32})(?:-small)?\.jpg(?:\.new)?$/.exec(file)?.[1];
		const found = name && (await stat(join(folder, file)).catch(ifAbsent));
		if (found && Date.now() - found.mtimeMs > untouchedMs) names.add(name);
	}
	return [...names];
}

async function writeWhole(folder: string, file: string, bytes: Buffer): Promise<void> {
	const path = join(folder, file);
	const handle = await open(`${path}.new`, "w", 0o600);
	try {
		await handle.writeFile(bytes);
		await handle.sync();
	} catch (error) {
		await rm(`${path}.new`, { force: true });
		throw error;
	} finally {
		await handle.close();
	}
	await rename(`${path}.new`, path);
}

/** That a file has its name is on the disk only when its folder is. */
async function syncFolder(folder: string): Promise<void> {
	const handle = await open(folder, "r");
	await handle.sync().finally(() => handle.close());
}

export function ifAbsent(error: NodeJS.ErrnoException): undefined {
	if (error.code !== "ENOENT") throw error;
}
