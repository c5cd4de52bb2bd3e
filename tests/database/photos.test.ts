import { randomUUID } from "node:crypto";
import { mkdtemp, readdir, rm, utimes } from "node:fs/promises";
import { tmpdir } from "node:os";
import path from "node:path";
import { sql } from "kysely";
import type { Client } from "pg";
import sharp from "sharp";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate, Grower } from "#app/auth/viewer.ts";
import { forgetAnswers } from "#app/collect/forgetting.server.ts";
import { findOwnAnswers } from "#app/collect/own-answers.server.ts";
import { writePhoto } from "#app/collect/photo-files.server.ts";
import { putPart } from "#app/collect/photo-parts.server.ts";
import { noPhoto, tooMany } from "#app/collect/photo.ts";
import { findOwnPhoto, findSentPhoto } from "#app/collect/photos.server.ts";
import { readMyData } from "#app/collect/my-data.server.ts";
import { findResponse } from "#app/collect/response-view.server.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { withdrawAnswer } from "#app/collect/withdrawal.server.ts";
import { sweepPhotos } from "#app/jobs/photos.server.ts";
import { tasks } from "#app/jobs/tasks.server.ts";
import { takeAway, takePhoto, takePiece } from "#app/routes/grower/parts/taking-photos.server.ts";
import { createTestDatabase } from "#tests/helpers/database.ts";
import { answeringOf, asGrower, closeLongAgo, growerOf, linkOf, submit } from "./answering-fixture.ts";
import { accessOf, addPhotoTo, answerAndSubmit, askForPhotos, type Asked, photoOf } from "./photos-fixture.ts";
import { addPerson, asDesk, connectOwner, count, loadPlaces, useDatabase } from "./surveys-fixture.ts";

let database: Awaited<ReturnType<typeof createTestDatabase>>;
let owner: Client;
let iowa: Associate;
let wisconsin: Associate;
let folder: string;

beforeAll(async () => {
	database = await createTestDatabase();
	folder = await mkdtemp(path.join(tmpdir(), "tallygrove-photos-"));
	useDatabase(database, { PHOTO_DIR: folder });
	owner = await connectOwner(database.ownerUrl);
	await loadPlaces(owner);
	iowa = await addPerson(owner, "Iowa's associate", ["19"]);
	wisconsin = await addPerson(owner, "Wisconsin's associate", ["55"]);
});
afterAll(async () => {
	await owner.end();
	await database.drop();
	await rm(folder, { recursive: true, force: true });
});

async function rowsOf({ place }: Pick<Asked, "place">): Promise<{ photo_id: string; file_name: string }[]> {
	const { rows } = await owner.query(
		`select photo_id, file_name from collect.photo join collect.response using (response_id)
		where survey_id = $1 order by added_at`,
		[place.surveyId],
	);
	return rows;
}

async function responseIdOf({ place }: Pick<Asked, "place">): Promise<string> {
	const { rows } = await owner.query("select response_id from collect.response where survey_id = $1", [place.surveyId]);
	return rows[0].response_id as string;
}

const filesOf = async (name: string) => (await readdir(folder)).filter((file) => file.startsWith(name)).toSorted();
const own = (viewer: Grower, place: Asked["place"], photoId: string) =>
	asGrower(viewer, (trx) => findOwnPhoto(trx, viewer, place, photoId));

/** Does the queue's work as the worker does. */
async function eraseQueued(): Promise<void> {
	const { rows: jobs } = await scopedTransaction({ kind: "none" }, (trx) =>
		sql<{ payload: unknown }>`delete from graphile_worker._private_jobs j using graphile_worker._private_tasks t
			where t.id = j.task_id and t.identifier = 'erase_photos' returning j.payload`.execute(trx),
	);
	for (const { payload } of jobs)
		await tasks.erase_photos(payload, { job: { attempts: 1, max_attempts: 25 } } as never);
}

const refusedWith = (status: number) => expect.objectContaining({ init: { status } });

/** Sends pieces of a photo as its page does. */
const piecewise = (asked: Asked, photoId: string, file: Buffer) => (offset: number, length: number) =>
	takePiece(
		accessOf(asked.grower),
		asked.place,
		{ photoId, questionKey: "photos", offset, size: file.length },
		file.subarray(offset, offset + length),
	);

describe("adding", () => {
	test("a photo is kept with both its pictures, and is the answer to its question", async () => {
		const asked = await askForPhotos(owner, iowa);
		const first = await addPhotoTo(asked);
		const second = await addPhotoTo(asked, { red: 10 });
		expect([first, second]).toMatchObject([{ kept: true }, { kept: true }]);
		const [row] = await rowsOf(asked);
		expect(await filesOf(row!.file_name)).toEqual([`${row!.file_name}-small.jpg`, `${row!.file_name}.jpg`]);
		const { answers } = await answeringOf(asked.grower, asked.place);
		expect(answers).toContainEqual(
			expect.objectContaining({ questionKey: "photos", kind: "given", value: [first.photoId, second.photoId] }),
		);
	});

	test("the same photo sent again is one photo, also when both arrive at once", async () => {
		const asked = await askForPhotos(owner, iowa);
		const photoId = randomUUID();
		const twice = await Promise.all([addPhotoTo(asked, { photoId }), addPhotoTo(asked, { photoId })]);
		expect([...twice, await addPhotoTo(asked, { photoId })]).toMatchObject([
			{ kept: true },
			{ kept: true },
			{ kept: true },
		]);
		const rows = await rowsOf(asked);
		expect(rows.length).toBe(1);
		expect((await filesOf("")).filter((file) => file.startsWith(rows[0]!.file_name)).length).toBe(2);
	});

	test("of nine photos at once five are kept, the others refused, and no file is left of those", async () => {
		const asked = await askForPhotos(owner, iowa);
		const before = (await filesOf("")).length;
		const taken = await Promise.all(Array.from({ length: 9 }, (_, red) => addPhotoTo(asked, { red })));
		expect(taken.filter((one) => "kept" in one).length).toBe(5);
		expect(taken.filter((one) => "problem" in one && one.problem.code === tooMany.code).length).toBe(4);
		expect((await rowsOf(asked)).length).toBe(5);
		expect((await filesOf("")).length).toBe(before + 10);
	});

	test("what is no photo leaves no row and no file", async () => {
		const asked = await askForPhotos(owner, iowa);
		const before = (await filesOf("")).length;
		const pdf = Buffer.from("%PDF-1.7\n1 0 obj");
		const named = { photoId: randomUUID(), questionKey: "photos" };
		expect(await takePhoto(accessOf(asked.grower), asked.place, named, pdf)).toEqual({ problem: noPhoto });
		expect([await rowsOf(asked), (await filesOf("")).length]).toEqual([[], before]);
	});

	test("nobody adds to another's answers, to a survey long closed, or to a question that asks for none", async () => {
		const asked = await askForPhotos(owner, iowa);
		const other = await askForPhotos(owner, iowa);
		const add = (viewer: Grower, questionKey = "photos") =>
			photoOf(1).then((file) => takePhoto(accessOf(viewer), asked.place, { photoId: randomUUID(), questionKey }, file));
		await expect(add(other.grower)).rejects.toEqual(refusedWith(404));
		await expect(add(linkOf(other.place))).rejects.toEqual(refusedWith(404));
		await expect(add(asked.grower, "protection")).rejects.toEqual(refusedWith(404));
		await asDesk(iowa, (trx) => closeSurvey(trx, iowa, asked.place.surveyId));
		await add(asked.grower);
		expect(await rowsOf(asked)).toHaveLength(1);
		await closeLongAgo(owner, asked.place.surveyId);
		await expect(add(asked.grower)).rejects.toEqual(refusedWith(410));
		expect(await rowsOf(asked)).toHaveLength(1);
	});

	test("an id that another response has is not taken over", async () => {
		const [asked, other] = [await askForPhotos(owner, iowa), await askForPhotos(owner, iowa)];
		const { photoId } = await addPhotoTo(asked);
		await expect(addPhotoTo(other, { photoId })).rejects.toEqual(refusedWith(404));
		expect((await rowsOf(asked)).map((row) => row.photo_id)).toEqual([photoId]);
		expect(await rowsOf(other)).toEqual([]);
	});
});

describe("piece by piece", () => {
	test("a photo that was cut off goes on where it stopped, and pieces that come twice do no harm", async () => {
		const asked = await askForPhotos(owner, iowa);
		const [photoId, file] = [randomUUID(), await photoOf(77)];
		const send = piecewise(asked, photoId, file);
		expect(await send(0, 100)).toEqual({ offset: 100 });
		expect(await send(0, 100)).toEqual({ offset: 100 });
		expect(await send(100, 150)).toEqual({ offset: 250 });
		// The phone was started anew and does not know how far it came.
		expect(await send(0, 64)).toEqual({ offset: 250 });
		expect(await rowsOf(asked)).toEqual([]);
		expect(await send(250, file.length)).toEqual({ kept: true });
		expect(await send(250, file.length)).toEqual({ kept: true });
		expect((await rowsOf(asked)).map((row) => row.photo_id)).toEqual([photoId]);
		expect(await readdir(path.join(folder, "incoming", await responseIdOf(asked)))).toEqual([]);
	});

	test("a piece that comes before its time is not taken, and the answer says from where to go on", async () => {
		const asked = await askForPhotos(owner, iowa);
		const send = piecewise(asked, randomUUID(), await photoOf(78));
		expect(await send(200, 100)).toEqual({ offset: 0 });
		expect(await send(0, 50)).toEqual({ offset: 50 });
		expect(await send(200, 100)).toEqual({ offset: 50 });
	});

	test("what its first bytes show to be no photo is refused before the rest is sent", async () => {
		const asked = await askForPhotos(owner, iowa);
		const send = piecewise(asked, randomUUID(), Buffer.from(`%PDF-1.7\n${"x".repeat(5000)}`));
		expect(await send(0, 100)).toEqual({ problem: noPhoto });
	});

	test("one grower cannot fill the disk with photos that never arrive", async () => {
		const asked = await askForPhotos(owner, iowa);
		const file = await photoOf(79);
		const begun = [];
		for (let i = 0; i < 13; i++) begun.push(await piecewise(asked, randomUUID(), file)(0, 50));
		expect(begun.filter((one) => "offset" in one).length).toBe(12);
		expect(begun.at(-1)).toEqual({ problem: tooMany });
	});
});

describe("who sees a photo", () => {
	test("its grower does, and no other, though it is there", async () => {
		const asked = await askForPhotos(owner, iowa);
		const other = await askForPhotos(owner, iowa);
		const { photoId } = await addPhotoTo(asked);
		const [row] = await rowsOf(asked);
		expect(await own(asked.grower, asked.place, photoId)).toBe(row!.file_name);
		expect(await own(other.grower, asked.place, photoId)).toBeUndefined();
		expect(await own(other.grower, other.place, photoId)).toBeUndefined();
		const both = growerOf(asked.place.operationId, other.place.operationId);
		expect(await own(both, other.place, photoId)).toBeUndefined();
		expect(await own(asked.grower, asked.place, "no-id")).toBeUndefined();
	});

	test("a personal link sees those of its own survey, until nothing can be sent in any more", async () => {
		const asked = await askForPhotos(owner, iowa);
		const { photoId } = await addPhotoTo(asked);
		const link = linkOf(asked.place);
		expect(await own(link, asked.place, photoId)).toBeTypeOf("string");
		expect(await own(linkOf({ ...asked.place, surveyId: randomUUID() }), asked.place, photoId)).toBeUndefined();
		await asDesk(iowa, (trx) => closeSurvey(trx, iowa, asked.place.surveyId));
		expect(await own(link, asked.place, photoId)).toBeTypeOf("string");
		await closeLongAgo(owner, asked.place.surveyId);
		expect(await own(link, asked.place, photoId)).toBeUndefined();
		expect(await own(asked.grower, asked.place, photoId)).toBeTypeOf("string");
	});

	test("the state's associate does once it is sent in, and no other state's", async () => {
		const asked = await askForPhotos(owner, iowa);
		const { photoId } = await addPhotoTo(asked);
		const ids = { surveyId: asked.place.surveyId, responseId: await responseIdOf(asked), photoId };
		const seen = (desk: Associate) => asDesk(desk, (trx) => findSentPhoto(trx, desk, ids));
		expect(await seen(iowa)).toBeUndefined();
		expect(await answerAndSubmit(asked)).toMatchObject({ outcome: "submitted" });
		expect(await seen(iowa)).toBe((await rowsOf(asked))[0]!.file_name);
		expect(await seen(wisconsin)).toBeUndefined();
		// Checked by the query too, not by the rows' guard alone.
		expect(await asDesk(iowa, (trx) => findSentPhoto(trx, wisconsin, ids))).toBeUndefined();
		expect(await asDesk(wisconsin, (trx) => findSentPhoto(trx, iowa, ids))).toBeUndefined();
		// Added since and not sent in again: still the grower's own.
		const later = await addPhotoTo(asked, { red: 5 });
		expect(await asDesk(iowa, (trx) => findSentPhoto(trx, iowa, { ...ids, photoId: later.photoId }))).toBeUndefined();
	});
});

describe("what was sent in", () => {
	test("names its photos, so that another one is a change to be sent, and the desk's page shows them", async () => {
		const asked = await askForPhotos(owner, iowa);
		const { photoId } = await addPhotoTo(asked);
		await answerAndSubmit(asked);
		const ids = { surveyId: asked.place.surveyId, responseId: await responseIdOf(asked) };
		const shown = await asDesk(iowa, (trx) => findResponse(trx, iowa, ids));
		const lines = shown!.groups.flatMap((group) => group.lines.map((line) => line.shown));
		expect(lines).toContainEqual({ kind: "photos", photoIds: [photoId] });
		await addPhotoTo(asked, { red: 9 });
		expect((await answeringOf(asked.grower, asked.place)).response?.changedSinceSubmission).toBe(true);
		expect(await submit(asked.grower, asked.place)).toMatchObject({ outcome: "submitted", version: 2 });
	});

	test("no longer shows a photo that was removed, whose files go with it", async () => {
		const asked = await askForPhotos(owner, iowa);
		const { photoId } = await addPhotoTo(asked);
		await answerAndSubmit(asked);
		const [row] = await rowsOf(asked);
		await takeAway(accessOf(asked.grower), asked.place, photoId);
		await takeAway(accessOf(asked.grower), asked.place, photoId);
		expect(await rowsOf(asked)).toEqual([]);
		await eraseQueued();
		expect(await filesOf(row!.file_name)).toEqual([]);
		const seen = await asGrower(asked.grower, (trx) => findOwnAnswers(trx, asked.grower, asked.place));
		const lines = seen!.groups.flatMap((group) => group.lines.map((line) => line.shown));
		expect(lines).toContainEqual({ kind: "photos", photoIds: [] });
	});

	test("another grower removes none, though it is there", async () => {
		const [asked, other] = [await askForPhotos(owner, iowa), await askForPhotos(owner, iowa)];
		const { photoId } = await addPhotoTo(asked);
		await takeAway(accessOf(other.grower), other.place, photoId);
		await expect(takeAway(accessOf(other.grower), asked.place, photoId)).rejects.toEqual(refusedWith(404));
		expect((await rowsOf(asked)).length).toBe(1);
	});

	test("loses its photos for good when it is withdrawn, and when its grower leaves", async () => {
		const [withdrawn, left] = [await askForPhotos(owner, iowa), await askForPhotos(owner, iowa)];
		const names: string[] = [];
		for (const asked of [withdrawn, left]) {
			await addPhotoTo(asked);
			await answerAndSubmit(asked);
			names.push((await rowsOf(asked))[0]!.file_name);
		}
		await asGrower(withdrawn.grower, (trx) => withdrawAnswer(trx, withdrawn.grower, withdrawn.place));
		await asGrower(left.grower, (trx) => forgetAnswers(trx, left.grower, left.place.operationId));
		expect([await rowsOf(withdrawn), await rowsOf(left)]).toEqual([[], []]);
		for (const name of names) expect((await filesOf(name)).length).toBe(2);
		await eraseQueued();
		for (const name of names) expect(await filesOf(name)).toEqual([]);
		expect(
			await count(owner, "collect.submission where answers::text like '%photos%' and response_id = $1", [
				await responseIdOf(left),
			]),
		).toBe(0);
	});

	test("a grower's own data lists the photos, with where their files are", async () => {
		const asked = await askForPhotos(owner, iowa);
		const { photoId } = await addPhotoTo(asked);
		const told = await asGrower(asked.grower, (trx) =>
			readMyData(trx, asked.grower, (photo) => `https://survey.example/${photo.photoId}`),
		);
		expect(told[0]!.surveys[0]!.photos).toMatchObject([
			{ photo_id: photoId, width_px: 64, height_px: 48, file: `https://survey.example/${photoId}` },
		]);
	});
});

test("the sweep erases old files that no photo has, and leaves young ones and those that are kept", async () => {
	const asked = await askForPhotos(owner, iowa);
	await addPhotoTo(asked);
	const kept = (await rowsOf(asked))[0]!.file_name;
	const pictures = {
		whole: await photoOf(1),
		small: await sharp(await photoOf(1))
			.resize(8)
			.toBuffer(),
	};
	const [old, young] = [await writePhoto(folder, pictures), await writePhoto(folder, pictures)];
	const part = { responseId: randomUUID(), photoId: randomUUID() };
	await putPart(folder, part, 0, Buffer.from("begun"));
	const long = new Date(Date.now() - 8 * 86_400_000);
	const aged = [
		...(await filesOf(old)),
		...(await filesOf(kept)),
		path.join("incoming", part.responseId, part.photoId),
	];
	for (const file of aged) await utimes(path.join(folder, file), long, long);
	await sweepPhotos();
	expect(await filesOf(old)).toEqual([]);
	expect([(await filesOf(young)).length, (await filesOf(kept)).length]).toEqual([2, 2]);
	expect(await readdir(path.join(folder, "incoming", part.responseId))).toEqual([]);
});
