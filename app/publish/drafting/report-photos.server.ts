import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate, Coordinator } from "#app/auth/viewer.ts";
import type { PhotoConsent } from "./photo.schema.ts";
import { findReport, logReport } from "./reports.server.ts";

/** A photo of a report with who gave consent to showing it, which readers are not told. */
export type ReportPhoto = { photoId: string; consentOf: string; consentOn: string };
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
		.select(["p.report_photo_id", "p.consent_of", (eb) => eb.cast<string>("p.consent_on", "text").as("consent_on")])
		.orderBy("p.added_at")
		.orderBy("p.report_photo_id")
		.execute();
	return rows.map((row) => ({ photoId: row.report_photo_id, consentOf: row.consent_of, consentOn: row.consent_on }));
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
	return row?.bytes;
}
