import { sql } from "kysely";
import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import { takenAwayOf } from "../report-photo.server.ts";
import type { PhotoReason, PhotoTakenAway } from "../report-photo.ts";
import { photosOf, ReportContent } from "../report.ts";
import type { PhotoConsent } from "./photo.schema.ts";
import { findReport, logReport } from "./reports.server.ts";

/** A photo of a report with who gave consent to showing it, which readers are not told. */
export type ReportPhoto = { photoId: string; consentOf: string; consentOn: string; takenAway: PhotoTakenAway | null };
/** A photo made anew from its dots, without the data that came with the file. */
export type MadePhoto = { whole: Buffer; widthPx: number; heightPx: number };

/** Keeps a photo with the consent that was given for it. Only a draft takes one: what is published is never written to. */
export async function addReportPhoto(
	trx: Trx,
	viewer: Associate,
	reportId: string,
	photo: MadePhoto,
	consent: PhotoConsent,
): Promise<"added" | "not_found" | "not_draft"> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return "not_found";
	if (report.state !== "draft") return "not_draft";
	await trx
		.insertInto("publish.report_photo")
		.values({
			report_id: reportId,
			bytes: photo.whole,
			width_px: photo.widthPx,
			height_px: photo.heightPx,
			consent_of: consent.consentOf,
			consent_on: consent.consentOn,
			added_by: viewer.personId,
		})
		.execute();
	await logReport(trx, viewer, "report.photo_added", report);
	return "added";
}

/** The photos of a report in all of its versions, in the order in which they came. */
export async function listReportPhotos(
	trx: Trx,
	viewer: Associate | Coordinator,
	reportId: string,
): Promise<ReportPhoto[]> {
	const report = await findReport(trx, viewer, reportId);
	if (!report) return [];
	const rows = await trx
		.selectFrom("publish.report_photo as p")
		.innerJoin("publish.report as r", "r.report_id", "p.report_id")
		.where("r.slug", "=", report.slug)
		.select(["p.taken_away_at", "p.taken_away_because"])
		.select(["p.report_photo_id", "p.consent_of", (eb) => eb.cast<string>("p.consent_on", "text").as("consent_on")])
		.orderBy("p.added_at")
		.orderBy("p.report_photo_id")
		.execute();
	return rows.map((row) => ({
		photoId: row.report_photo_id,
		consentOf: row.consent_of,
		consentOn: row.consent_on,
		takenAway: takenAwayOf(row),
	}));
}

/** A photo of any report, published or not, for those who write and approve reports. */
export async function findDraftPhoto(
	trx: Trx,
	_viewer: Associate | Coordinator,
	photoId: string,
): Promise<Buffer | undefined> {
	if (!z.uuid().safeParse(photoId).success) return undefined;
	const row = await trx
		.selectFrom("publish.report_photo")
		.select("bytes")
		.where("report_photo_id", "=", photoId)
		.executeTakeFirst();
	return row?.bytes ?? undefined;
}

export type TakenAway = { outcome: "taken_away"; printAgain: string[] } | { outcome: "not_found" };

/**
 * Takes a photo out of a report and out of the database, published or not, with every printed version that showed it; its place
 * says when and why. A second time finds it gone, which is as good.
 * @returns the published versions that have to be printed anew.
 */
export async function takePhotoAway(
	trx: Trx,
	viewer: Associate | Coordinator,
	reportId: string,
	photoId: string,
	because: PhotoReason,
): Promise<TakenAway> {
	const report = await findReport(trx, viewer, reportId);
	const photo = (await listReportPhotos(trx, viewer, reportId)).find((each) => each.photoId === photoId);
	if (!report || !photo) return { outcome: "not_found" };
	if (photo.takenAway) return { outcome: "taken_away", printAgain: [] };
	await trx
		.updateTable("publish.report_photo")
		.set({ bytes: null, taken_away_at: sql`now()`, taken_away_by: viewer.personId, taken_away_because: because })
		.where("report_photo_id", "=", photoId)
		.where("taken_away_at", "is", null)
		.execute();
	const versions = await trx
		.selectFrom("publish.report")
		.select(["report_id", "content"])
		.where("slug", "=", report.slug)
		.where("state", "=", "published")
		.execute();
	const printAgain = versions
		.filter(({ content }) => photosOf(ReportContent.parse(content)).includes(photoId))
		.map((version) => version.report_id);
	if (printAgain.length > 0) {
		await trx.deleteFrom("publish.report_file").where("report_id", "in", printAgain).execute();
	}
	await logReport(trx, viewer, "report.photo_taken_away", report, { photo: photoId, because });
	return { outcome: "taken_away", printAgain };
}
