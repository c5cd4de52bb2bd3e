import { randomUUID } from "node:crypto";
import type { Client } from "pg";
import sharp from "sharp";
import type { Access } from "#app/auth/guard.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import type { AnswerPlace } from "#app/collect/responses.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { type Taken, takePhoto } from "#app/routes/grower/parts/taking-photos.server.ts";
import { asGrower, beginAnswering, growerOf, submit, typeStep } from "./answering-fixture.ts";
import { addOperation, asDesk, draftOf, type NewOperation } from "./surveys-fixture.ts";

/** An operation that an open survey after a freeze asks for photos too, and that has begun to answer. */
export async function askForPhotos(owner: Client, associate: Associate, given: Partial<NewOperation> = {}) {
	const operationId = await addOperation(owner, { state: "19", ...given });
	const [state] = associate.stateFips;
	const draft = draftOf([state!], { formKey: "after_freeze", titleEn: "After a freeze", titleEs: "Tras una helada" });
	const surveyId = await asDesk(associate, async (trx) => {
		const made = (await createSurvey(trx, associate, draft)) as { surveyId: string };
		if ((await openSurvey(trx, associate, made.surveyId)) !== "opened") throw new Error("the survey did not open");
		return made.surveyId;
	});
	const { rows } = await owner.query("select planting_id from directory.planting where operation_id = $1", [
		operationId,
	]);
	const place = { surveyId, operationId };
	const grower = growerOf(operationId);
	await beginAnswering(grower, place);
	return { place, grower, plantingId: rows[0].planting_id as string };
}
export type Asked = Awaited<ReturnType<typeof askForPhotos>>;

/** The grower as a request's guard lets them in. */
export const accessOf = (viewer: Grower): Access<Grower> => ({
	viewer,
	transaction: (work) => asGrower(viewer, work),
});

/** A small photo; no two of another color are alike. */
export function photoOf(red: number): Promise<Buffer> {
	return sharp({ create: { width: 64, height: 48, channels: 3, background: { r: red, g: 90, b: 40 } } })
		.jpeg()
		.toBuffer();
}

/** Adds a photo as its page does. */
export async function addPhotoTo(
	{ place, grower }: { place: AnswerPlace; grower: Grower },
	{ photoId = randomUUID() as string, red = 120 } = {},
): Promise<Taken & { photoId: string }> {
	const taken = await takePhoto(accessOf(grower), place, { photoId, questionKey: "photos" }, await photoOf(red));
	return { ...taken, photoId };
}

/** Answers all that has to be answered, and sends it in. */
export async function answerAndSubmit({ place, grower, plantingId }: Asked) {
	const type = (step: string, values: Record<string, string>) => typeStep(grower, place, step, values);
	await type("night", { coldest_day: "2031-05-04", coldest: "27", coldest_unit: "fahrenheit", hours_below: "4" });
	await type(`planting-${plantingId}`, { stage: "full_bloom", buds_cut: "50", buds_dead: "10" });
	await type("protection", { protection: "none" });
	return submit(grower, place);
}
