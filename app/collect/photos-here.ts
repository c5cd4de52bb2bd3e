import type { Outbox } from "./outbox.ts";
import type { PhotoProblem } from "./photo.ts";

/** A photo that a phone holds and the server does not have yet. Its picture lies beside, under the same id. */
export type PhotoHere = {
	photoId: string;
	stepKey: string;
	questionKey: string;
	sizeBytes: number;
	/** Why the server will never take it; the grower is told and takes it away. */
	problem: PhotoProblem | null;
};

export function withPhoto(outbox: Outbox, photo: PhotoHere): Outbox {
	return { ...outbox, photos: [...withoutPhoto(outbox, photo.photoId).photos, photo] };
}

/** The server has it, or it was taken away. */
export function withoutPhoto(outbox: Outbox, photoId: string): Outbox {
	return { ...outbox, photos: outbox.photos.filter((photo) => photo.photoId !== photoId) };
}

export function withRefusedPhoto(outbox: Outbox, photoId: string, problem: PhotoProblem): Outbox {
	const photos = outbox.photos.map((photo) => (photo.photoId === photoId ? { ...photo, problem } : photo));
	return { ...outbox, photos };
}

/** The photo to send next. */
export function nextPhoto(outbox: Outbox): PhotoHere | undefined {
	return outbox.photos.find(({ problem }) => problem === null);
}
