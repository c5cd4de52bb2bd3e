import type { Access } from "#app/auth/guard.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { erasePhoto, writePhoto } from "#app/collect/photo-files.server.ts";
import { dropParts, putPart, readParts } from "#app/collect/photo-parts.server.ts";
import { isPicture, readPicture } from "#app/collect/photo-picture.server.ts";
import { notKept, type PhotoProblem, problemOfBytes, tooMany } from "#app/collect/photo.ts";
import { addPhoto, mayAddPhoto, removePhoto } from "#app/collect/photos.server.ts";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";
import { refusal } from "#app/lib/refusal.ts";
import type { Place } from "./answering.server.ts";

type Named = { photoId: string; questionKey: string };
export type Taken = { kept: true } | { problem: PhotoProblem };

/**
 * Keeps a whole photo: its files are on the disk before its row is there, so that none is told to be kept and is not.
 * @throws refusal for who may not add to this survey, or when it is closed.
 */
export async function takePhoto(grower: Access<Grower>, place: Place, named: Named, file: Uint8Array): Promise<Taken> {
	const before = await mayAdd(grower, place, named);
	if ("taken" in before) return before.taken;
	const picture = await readPicture(file);
	if (!isPicture(picture)) return { problem: picture };
	const folder = env().PHOTO_DIR;
	const fileName = await writePhoto(folder, picture).catch((error: unknown) => {
		log.error({ err: error }, "a photo could not be written");
	});
	if (fileName === undefined) return { problem: notKept };
	const { widthPx, heightPx, whole } = picture;
	const photo = { ...named, fileName, widthPx, heightPx, sizeBytes: whole.length };
	// Where the transaction breaks, nobody knows whether the row is there: the files stay, and the sweep finds out.
	const outcome = await grower.transaction((trx) => addPhoto(trx, grower.viewer, place, photo));
	if (outcome !== "added") await erasePhoto(folder, fileName);
	if (outcome === "too_many") return { problem: tooMany };
	return outcome === "added" || outcome === "known" ? { kept: true } : refuse(outcome);
}

/** Takes one piece of a photo, and with the last one the photo. @returns how far it has come, or what came of it. */
export async function takePiece(
	grower: Access<Grower>,
	place: Place,
	{ offset, size, ...named }: Named & { offset: number; size: number },
	piece: Uint8Array,
): Promise<Taken | { offset: number }> {
	const before = await mayAdd(grower, place, named);
	if ("taken" in before) return before.taken;
	const problem = offset === 0 ? problemOfBytes(piece) : undefined;
	if (problem) return { problem };
	const folder = env().PHOTO_DIR;
	const part = { responseId: before.responseId, photoId: named.photoId };
	const held = await putPart(folder, part, offset, piece);
	if (held === undefined) return { problem: tooMany };
	if (held < size) return { offset: held };
	const whole = await readParts(folder, part);
	if (!whole) return { offset: 0 };
	const taken = await takePhoto(grower, place, named, whole);
	// What could not be kept for a reason that passes need not be sent again.
	if (!("problem" in taken && taken.problem.code === notKept.code)) await dropParts(folder, part);
	return taken;
}

/** Takes a photo away for good. @throws refusal like the others. */
export async function takeAway(grower: Access<Grower>, place: Place, photoId: string): Promise<void> {
	const outcome = await grower.transaction((trx) => removePhoto(trx, grower.viewer, place, photoId));
	if (outcome !== "removed") refuse(outcome);
}

async function mayAdd(grower: Access<Grower>, place: Place, named: Named) {
	const may = await grower.transaction((trx) => mayAddPhoto(trx, grower.viewer, place, named));
	if (may === "known") return { taken: { kept: true } satisfies Taken };
	if (may === "too_many") return { taken: { problem: tooMany } satisfies Taken };
	return typeof may === "string" ? refuse(may) : may;
}

function refuse(outcome: "not_found" | "closed" | "not_started" | "question_not_found"): never {
	if (outcome === "closed") throw refusal("survey_closed");
	throw refusal(outcome === "question_not_found" ? "page_not_found" : "survey_not_found");
}
