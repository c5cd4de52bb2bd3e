import type { Trx } from "#app/auth/scope.server.ts";
import { queueJob } from "#app/jobs/queue.server.ts";
import type { Answer } from "./form.ts";

/** A response's photos in the order in which they came. The caller has narrowed the response to its viewer. */
export function listPhotos(trx: Trx, responseId: string) {
	return trx
		.selectFrom("collect.photo")
		.where("response_id", "=", responseId)
		.select(["photo_id as photoId", "question_key as questionKey", "added_at as addedAt"])
		.select(["width_px as widthPx", "height_px as heightPx", "size_bytes as sizeBytes"])
		.orderBy("added_at")
		.orderBy("photo_id")
		.execute();
}

/** Photos as answers to their questions: their rows are the one place where they are kept. */
export async function listPhotoAnswers(trx: Trx, responseId: string): Promise<Answer[]> {
	const photos = await listPhotos(trx, responseId);
	const keys = [...new Set(photos.map(({ questionKey }) => questionKey))];
	return keys.map((questionKey) => ({
		questionKey,
		plantingId: null,
		kind: "given",
		value: photos.filter((photo) => photo.questionKey === questionKey).map(({ photoId }) => photoId),
		given: null,
	}));
}

/** Answers as they were sent in, without the photos that were taken away since. */
export async function withoutErased(trx: Trx, responseId: string, answers: Answer[], photoKeys: string[]) {
	const isPhoto = ({ questionKey }: Answer) => photoKeys.includes(questionKey);
	if (!answers.some(isPhoto)) return answers;
	const there = new Set((await listPhotos(trx, responseId)).map(({ photoId }) => photoId));
	return answers.map((answer) => {
		if (!isPhoto(answer) || !Array.isArray(answer.value)) return answer;
		return { ...answer, value: answer.value.filter((photoId) => there.has(photoId)) };
	});
}

/** Takes away a response's photos, or one of them. The files follow when the transaction has ended well, and only then. */
export async function erasePhotos(trx: Trx, responseId: string, photoId?: string): Promise<void> {
	const gone = await trx
		.deleteFrom("collect.photo")
		.where("response_id", "=", responseId)
		.$if(photoId !== undefined, (rows) => rows.where("photo_id", "=", photoId!))
		.returning("file_name")
		.execute();
	const fileNames = gone.map(({ file_name }) => file_name);
	if (fileNames.length > 0) await queueJob(trx, "erase_photos", { fileNames });
}
