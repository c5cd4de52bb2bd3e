import { sql } from "kysely";
import type { Client } from "pg";
import sharp from "sharp";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { decideReport } from "#app/jobs/decide-report.server.ts";
import { takeReportPhotoAway } from "#app/jobs/publish-report.server.ts";
import { countTakenAway, keepReportFile } from "#app/publish/drafting/report-files.server.ts";
import { startCorrection } from "#app/publish/drafting/report-correction.server.ts";
import { addReportPhoto, findDraftPhoto, listReportPhotos } from "#app/publish/drafting/report-photos.server.ts";
import { findReport, saveReport, submitReport } from "#app/publish/drafting/reports.server.ts";
import { startReport } from "#app/publish/drafting/start-report.server.ts";
import { findReleaseById } from "#app/publish/releases.server.ts";
import { findReportPhoto } from "#app/publish/report-photo.server.ts";
import { findReportFile } from "#app/publish/reports.server.ts";
import { missingWords, type ReportContent, withOwnPhotos } from "#app/publish/report.ts";
import { resolveReport } from "#app/publish/resolved-report.server.ts";
import { readReportPhoto } from "#app/routes/desk/parts/report-photo-form.server.ts";
import { loader as photoLoader } from "#app/routes/public/report-photo.ts";
import { createTestDatabase, type TestDatabase } from "#tests/helpers/database.ts";
import { addRelease } from "./publish-fixture.ts";
import { addPerson, asDesk, connectOwner, count, useDatabase } from "./surveys-fixture.ts";

let database: TestDatabase;
let owner: Client;
let author: Associate;
let coordinator: Coordinator;
let file: Buffer;

beforeAll(async () => {
	database = await createTestDatabase();
	useDatabase(database);
	owner = await connectOwner(database.ownerUrl);
	author = await addPerson(owner, "Iowa's associate", []);
	coordinator = { ...(await addPerson(owner, "The coordinator", [])), role: "coordinator" } as unknown as Coordinator;
	file = await sharp({ create: { width: 2400, height: 1200, channels: 3, background: "#5b2a5e" } })
		.withExif({ IFD0: { Copyright: "Orchard lane 7" }, IFD3: { GPSLatitude: "41/1 40/1 0/1" } })
		.jpeg()
		.toBuffer();
});
afterAll(async () => {
	await owner.end();
	await database.drop();
});

const desk = <T>(work: Parameters<typeof asDesk<T>>[1]) => asDesk(author, work);
const words = (text: string) => ({ en: text, es: text });
const consent = { consentOf: "Ana Reyes", consentOn: "2026-05-04", consentGiven: "on" as const };

function sent(fields: Record<string, string>, photo: Buffer | null = file): Request {
	const body = new FormData();
	for (const [name, value] of Object.entries(fields)) body.append(name, value);
	body.append(
		"photo",
		photo ? new File([new Uint8Array(photo)], "IMG_7.jpg", { type: "image/jpeg" }) : new File([], ""),
	);
	return new Request("https://survey.example/desk/reports/1/photos", { method: "POST", body });
}

/** A draft with one photo in it, whose words may be left out. */
async function draft(title: string, alt = words("A frozen blossom")) {
	const { releaseId } = await addRelease(owner);
	const reportId = (await desk((trx) => startReport(trx, author, releaseId, { en: () => title, es: () => title })))!;
	const read = await readReportPhoto(sent(consent));
	if (!read.ok) throw new Error("the photo is a photo");
	expect(await desk((trx) => addReportPhoto(trx, author, reportId, read.photo, read.consent))).toBe("added");
	const [photo] = await desk((trx) => listReportPhotos(trx, author, reportId));
	const content: ReportContent = {
		title: words(title),
		summary: words("Summary"),
		blocks: [{ id: "b1", type: "photo", photo: photo!.photoId, alt }],
	};
	await desk((trx) => saveReport(trx, author, reportId, 1, content));
	return { reportId, releaseId, content, photoId: photo!.photoId };
}
const publish = async (reportId: string) => {
	await desk((trx) => submitReport(trx, author, reportId));
	return desk((trx) => decideReport(trx, coordinator, reportId, { intent: "publish" }, new Date()));
};
const served = (photoId: string) => photoLoader({ params: { photoId } } as never);
const notFound = { data: { code: "report_not_found" } };

test("a photo is kept small and without what came with its file, with who consented and when", async () => {
	expect((await sharp(file).metadata()).exif?.toString("latin1")).toContain("Orchard lane 7");
	const { reportId, photoId } = await draft("Kept");
	const { rows } = await owner.query("select bytes, width_px, height_px, consent_of, consent_on::text, added_by from publish.report_photo where report_photo_id = $1", [photoId]); // prettier-ignore
	const { bytes, ...row } = rows[0];
	expect(row).toEqual({ width_px: 1600, height_px: 800, consent_of: "Ana Reyes", consent_on: "2026-05-04", added_by: author.personId }); // prettier-ignore
	const kept = await sharp(bytes).metadata();
	expect([kept.width, kept.exif]).toEqual([1600, undefined]);
	expect(await count(owner, "log.event where action = 'report.photo_added' and subject_id = $1", [reportId])).toBe(1);
});

test.each([
	["no file", { ...consent }, null, [["photo", "empty"]]],
	["a file that is no photo", { ...consent }, Buffer.from("GIF89a, or so it says"), [["photo", "photo_not_a_photo"]]],
	["no consent", { consentOf: "Ana", consentOn: "2026-05-04" }, undefined, [["consentGiven", "agreement_needed"]]],
	["a day to come", { ...consent, consentOn: "2999-01-01" }, undefined, [["consentOn", "date_in_future"]]],
	[
		"no day and no name",
		{ consentGiven: "on", consentOn: "soon" },
		undefined,
		[
			["consentOf", "empty"],
			["consentOn", "date_wrong"],
		],
	],
] as const)("a photo with %s is not taken, and what was typed comes back", async (_what, fields, photo, problems) => {
	const read = await readReportPhoto(sent(fields, photo as Buffer | null | undefined));
	if (read.ok) throw new Error("it was taken");
	expect(read.problems.map(({ field, code }) => [field, code])).toEqual(problems);
	expect(read.values).toMatchObject(fields);
});

test("a report is not handed in while its photo lacks words in a language or is not chosen", async () => {
	const { reportId, content, photoId } = await draft("Words", { en: "A frozen blossom", es: " " });
	expect(await desk((trx) => submitReport(trx, author, reportId))).toBe("incomplete");
	expect(missingWords(content)).toEqual([{ field: "blocks[0].alt.es", code: "empty" }]);
	// Another report's photo counts as none: nobody gave consent to it here.
	const foreign = withOwnPhotos(content, new Set());
	expect(foreign.blocks).toMatchObject([{ photo: "" }]);
	expect(missingWords(foreign)).toContainEqual({ field: "blocks[0].photo", code: "empty" });
	expect(withOwnPhotos(content, new Set([photoId]))).toEqual(content);
});

test("readers get a photo once its report is published, those who write reports before", async () => {
	const { reportId, releaseId, content, photoId } = await draft("Read");
	const release = (await findReleaseById(releaseId))!;
	expect(await findReportPhoto(photoId)).toBeUndefined();
	await expect(served(photoId)).rejects.toMatchObject(notFound);
	expect((await desk((trx) => findDraftPhoto(trx, author, photoId)))?.length).toBeGreaterThan(1000);
	expect((await resolveReport(content, release)).blocks[0]).toMatchObject({ type: "photo", size: null });

	await publish(reportId);
	const answer = await served(photoId);
	expect(answer.headers.get("content-type")).toBe("image/jpeg");
	expect((await sharp(Buffer.from(await answer.arrayBuffer())).metadata()).width).toBe(1600);
	const told = (await resolveReport(content, release)).blocks[0];
	expect(told).toMatchObject({ type: "photo", photo: photoId, size: { widthPx: 1600, heightPx: 800 } });
	await using reader = await connectOwner(database.readerUrl);
	await expect(reader.query("select consent_of from publish.report_photo")).rejects.toThrow("permission denied");
	for (const photo of ["00000000-0000-4000-8000-000000000000", "x"]) await expect(served(photo)).rejects.toMatchObject(notFound); // prettier-ignore
});

test("a published report takes no more photos, and its correction has those that it had", async () => {
	const { reportId, photoId } = await draft("Corrected");
	await publish(reportId);
	const read = await readReportPhoto(sent(consent));
	if (!read.ok) throw new Error("the photo is a photo");
	expect(await desk((trx) => addReportPhoto(trx, author, reportId, read.photo, read.consent))).toBe("not_draft");
	const next = await desk((trx) => startCorrection(trx, author, reportId));
	if (next.outcome !== "started") throw new Error("a published report can be corrected");
	const photos = await desk((trx) => listReportPhotos(trx, author, next.reportId));
	expect(photos.map((photo) => photo.photoId)).toEqual([photoId]);
	expect((await desk((trx) => findReport(trx, author, next.reportId)))?.content.blocks).toMatchObject([
		{ photo: photoId },
	]);
});

test("a photo of a report whose figures were withdrawn is served to nobody, though it is there", async () => {
	const { reportId, releaseId, photoId } = await draft("Withdrawn");
	await publish(reportId);
	expect((await served(photoId)).status).toBe(200);
	await owner.query("alter table release.withdrawal disable trigger user");
	await owner.query("insert into release.withdrawal (release_id, reason) values ($1, $2)", [
		releaseId,
		JSON.stringify(words("A mistake in the frame")),
	]);
	await owner.query("alter table release.withdrawal enable trigger user");
	await expect(served(photoId)).rejects.toMatchObject(notFound);
	expect(await count(owner, "publish.report_photo where report_photo_id = $1", [photoId])).toBe(1);
});

const takeAway = (reportId: string, photoId: string) =>
	desk((trx) => takeReportPhotoAway(trx, author, reportId, photoId, "consent_withdrawn"));
const printed = { bytes: Buffer.from("%PDF-1.7 with the photo") };

test("a photo taken away is gone from page, PDF and database, and its place says when and why", async () => {
	const { reportId, releaseId, content, photoId } = await draft("Taken away");
	const release = (await findReleaseById(releaseId))!;
	await publish(reportId);
	await desk((trx) => keepReportFile(trx, reportId, "es", printed, 0));
	expect([(await served(photoId)).status, await findReportFile(reportId, "es")]).toEqual([200, printed.bytes]);
	await desk((trx) => sql`delete from graphile_worker._private_jobs`.execute(trx));

	const goneBefore = await desk((trx) => countTakenAway(trx, reportId));
	expect(await takeAway(reportId, photoId)).toBe("taken_away");
	await expect(served(photoId)).rejects.toMatchObject(notFound);
	expect(await desk((trx) => findDraftPhoto(trx, author, photoId))).toBeUndefined();
	expect(await count(owner, "publish.report_photo where report_photo_id = $1 and bytes is null", [photoId])).toBe(1);
	expect(await findReportFile(reportId, "es")).toBeUndefined();
	const { rows } = await desk((trx) =>
		sql<{ key: string }>`select key from graphile_worker.jobs where task_identifier = 'print_report'`.execute(trx),
	);
	expect(rows.map(({ key }) => key).toSorted()).toEqual(["en", "es"].map((language) => `print_report:${reportId}:${language}`)); // prettier-ignore
	const [told] = (await resolveReport(content, release)).blocks;
	expect(told).toMatchObject({ type: "photo_gone", takenAway: { because: "consent_withdrawn" } });
	expect(JSON.stringify(told)).not.toContain("frozen blossom");

	// What it showed is told in no kept version either, nor can anybody write it there again; all else stays as published.
	const kept = await owner.query(
		"select content::text from publish.report where report_id = $1 union all select content::text from publish.report_edit where report_id = $1",
		[reportId],
	);
	expect(kept.rows.length).toBeGreaterThan(1);
	expect(JSON.stringify(kept.rows)).not.toContain("frozen blossom");
	expect(JSON.stringify(kept.rows)).toContain("Taken away");
	for (const change of ["content = $2", "content = content, slug = 'other'"]) {
		const again = JSON.stringify({ ...content, title: words("Other") });
		const values = change.includes("$2") ? [reportId, again] : [reportId];
		await expect(owner.query(`update publish.report set ${change} where report_id = $1`, values)).rejects.toThrow(
			"frozen",
		);
	}

	// A print that was under way may show it still, and is not kept; the next one is.
	await desk((trx) => keepReportFile(trx, reportId, "es", printed, goneBefore));
	expect(await findReportFile(reportId, "es")).toBeUndefined();
	await desk((trx) => keepReportFile(trx, reportId, "es", { bytes: Buffer.from("%PDF-1.7") }, goneBefore + 1));
	expect(await findReportFile(reportId, "es")).toEqual(Buffer.from("%PDF-1.7"));

	// Twice is harmless, and tells the log nothing new; nothing brings the picture back.
	expect(await takeAway(reportId, photoId)).toBe("taken_away");
	expect(await count(owner, "log.event where action = 'report.photo_taken_away' and subject_id = $1", [reportId])).toBe(
		1,
	);
	const back = "update publish.report_photo set bytes = 'x', taken_away_at = null, taken_away_by = null, taken_away_because = null where report_photo_id = $1"; // prettier-ignore
	await expect(owner.query(back, [photoId])).rejects.toThrow("taken away and nothing else");
});

test("a photo goes by its own report alone, by whoever approves reports too, and from all versions that show it", async () => {
	const [one, other] = [await draft("One"), await draft("Other")];
	await publish(one.reportId);
	expect(await takeAway(other.reportId, one.photoId)).toBe("not_found");
	expect((await served(one.photoId)).status).toBe(200);
	const next = await desk((trx) => startCorrection(trx, author, one.reportId));
	if (next.outcome !== "started") throw new Error("a published report can be corrected");
	await desk((trx) => keepReportFile(trx, one.reportId, "en", printed, 0));
	const taken = await desk((trx) =>
		takeReportPhotoAway(trx, coordinator, next.reportId, one.photoId, "shown_by_mistake"),
	);
	expect(taken).toBe("taken_away");
	expect(await findReportFile(one.reportId, "en")).toBeUndefined();
	const photos = await desk((trx) => listReportPhotos(trx, author, next.reportId));
	expect(photos).toMatchObject([{ photoId: one.photoId, takenAway: { because: "shown_by_mistake" } }]);
	// The other report keeps its own.
	expect(await desk((trx) => findDraftPhoto(trx, author, other.photoId))).toBeDefined();
});
