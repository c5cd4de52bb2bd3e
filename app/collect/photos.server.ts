import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import { type AnswerPlace, findPlace } from "./answer-place.server.ts";
import type { FormDefinition } from "./form.ts";
import { erasePhotos, listPhotos } from "./photo-rows.server.ts";
import { mostPhotos } from "./photo.ts";
import { lockAnswering } from "./responses.server.ts";
import { isId } from "./surveys.server.ts";

/** A photo to add, its files already on the disk. */
export type NewPhoto = {
	photoId: string;
	questionKey: string;
	fileName: string;
	widthPx: number;
	heightPx: number;
	sizeBytes: number;
};
type Refused = "not_found" | "closed" | "not_started" | "question_not_found";

/**
 * Whether one more photo can be added, before anything of it is read.
 * @returns "known" for one that was added before, and the response that it goes to where it can be.
 */
export async function mayAddPhoto(
	trx: Trx,
	viewer: Grower,
	place: AnswerPlace,
	{ photoId, questionKey }: Pick<NewPhoto, "photoId" | "questionKey">,
): Promise<Refused | "known" | "too_many" | { responseId: string }> {
	const found = await findPlace(trx, viewer, place);
	if (!found) return "not_found";
	if (!found.isOpen && !found.isLate) return "closed";
	if (!found.response) return "not_started";
	if (!asksForPhotos(found.definition as FormDefinition, questionKey)) return "question_not_found";
	const { responseId } = found.response;
	const photos = await listPhotos(trx, responseId);
	if (photos.some((photo) => photo.photoId === photoId)) return "known";
	return photos.length < mostPhotos ? { responseId } : "too_many";
}

/** Adds a photo whose files are on the disk. They are counted under the response's lock: five phones at once add five. */
export async function addPhoto(
	trx: Trx,
	viewer: Grower,
	place: AnswerPlace,
	photo: NewPhoto,
): Promise<Refused | "added" | "known" | "too_many"> {
	const answering = await lockAnswering(trx, viewer, place);
	if (typeof answering === "string") return answering;
	if (!asksForPhotos(answering.definition, photo.questionKey)) return "question_not_found";
	const { responseId } = answering.response;
	const photos = await listPhotos(trx, responseId);
	if (photos.some(({ photoId }) => photoId === photo.photoId)) return "known";
	if (photos.length >= mostPhotos) return "too_many";
	const added = await trx
		.insertInto("collect.photo")
		.values({
			photo_id: photo.photoId,
			response_id: responseId,
			question_key: photo.questionKey,
			file_name: photo.fileName,
			width_px: photo.widthPx,
			height_px: photo.heightPx,
			size_bytes: photo.sizeBytes,
		})
		.onConflict((conflict) => conflict.column("photo_id").doNothing())
		.returning("photo_id")
		.executeTakeFirst();
	// An id that another response has: no phone makes the same one twice.
	return added ? "added" : "not_found";
}

/** Takes a photo of the grower's own away for good, also from what was sent in before. Again changes nothing. */
export async function removePhoto(
	trx: Trx,
	viewer: Grower,
	place: AnswerPlace,
	photoId: string,
): Promise<Refused | "removed"> {
	const answering = await lockAnswering(trx, viewer, place);
	if (typeof answering === "string") return answering;
	if (!isId(photoId)) return "not_found";
	await erasePhotos(trx, answering.response.responseId, photoId);
	return "removed";
}

/**
 * The name of a photo's files, for the grower whose answer it belongs to.
 * @returns undefined for everybody else's photos, and to a personal link for those of other surveys, or when its own has closed.
 */
export async function findOwnPhoto(trx: Trx, viewer: Grower, place: AnswerPlace, photoId: string) {
	const found = isId(photoId) ? await findPlace(trx, viewer, place) : undefined;
	if (!found?.response || (viewer.link && !found.isOpen && !found.isLate)) return undefined;
	return findFileName(trx, found.response.responseId, photoId);
}

/**
 * The name of a photo's files, for an associate of the grower's state.
 * @returns undefined outside the viewer's states, and for a photo that was not sent in or was taken back.
 */
export async function findSentPhoto(
	trx: Trx,
	viewer: Associate,
	{ surveyId, responseId, photoId }: { surveyId: string; responseId: string; photoId: string },
) {
	if (![surveyId, responseId, photoId].every(isId)) return undefined;
	const sent = await trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.submission as s", "s.response_id", "r.response_id")
		.where("r.response_id", "=", responseId)
		.where("r.survey_id", "=", surveyId)
		.where("r.state_fips", "in", viewer.stateFips)
		.where("s.withdrawn_at", "is", null)
		.where(
			sql<boolean>`exists (select from jsonb_array_elements(s.answers -> 'answers') a
			where jsonb_typeof(a -> 'value') = 'array' and a -> 'value' ? ${photoId})`,
		)
		.select("r.response_id")
		.limit(1)
		.executeTakeFirst();
	return sent && findFileName(trx, responseId, photoId);
}

async function findFileName(trx: Trx, responseId: string, photoId: string): Promise<string | undefined> {
	const row = await trx
		.selectFrom("collect.photo")
		.select("file_name")
		.where("photo_id", "=", photoId)
		.where("response_id", "=", responseId)
		.executeTakeFirst();
	return row?.file_name;
}

function asksForPhotos({ screens }: FormDefinition, questionKey: string): boolean {
	return screens.some(({ questions }) => questions.some(({ key, type }) => key === questionKey && type === "photo"));
}
