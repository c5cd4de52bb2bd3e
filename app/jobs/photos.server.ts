import { scopedTransaction } from "#app/auth/scope.server.ts";
import { erasePhoto, listPhotoFiles } from "#app/collect/photo-files.server.ts";
import { dropOldParts } from "#app/collect/photo-parts.server.ts";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";

const day = 24 * 60 * 60 * 1000;
/** A file is there before its row: one that is younger may be a photo that is just being added. */
const orphanAge = day;
/** For so long a phone may be without signal and still go on where it stopped. */
const partAge = 7 * day;

/** Erases the files of photos that were taken away. */
export async function erasePhotoFiles({ fileNames }: { fileNames: string[] }): Promise<void> {
	for (const name of fileNames) await erasePhoto(env().PHOTO_DIR, name);
}

/** Clears away what a crash can leave: files of photos that were never added or whose erasing was lost, and half-sent ones. */
export async function sweepPhotos(): Promise<void> {
	const folder = env().PHOTO_DIR;
	const names = await listPhotoFiles(folder, orphanAge);
	const kept = new Set(await listKept(names));
	const orphans = names.filter((name) => !kept.has(name));
	for (const name of orphans) await erasePhoto(folder, name);
	const parts = await dropOldParts(folder, partAge);
	if (orphans.length + parts > 0) log.info({ orphans: orphans.length, parts }, "photo files swept");
}

async function listKept(names: string[]): Promise<string[]> {
	const rows = await scopedTransaction({ kind: "network" }, (trx) =>
		trx
			.selectFrom("collect.photo")
			.select("file_name")
			.where((eb) => eb("file_name", "=", eb.fn.any(eb.val(names))))
			.execute(),
	);
	return rows.map(({ file_name }) => file_name);
}
