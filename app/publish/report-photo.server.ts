import type { Kysely } from "kysely";
import { z } from "zod";
import { reader, type ReaderDB } from "./reader.server.ts";
import type { PhotoReason, PhotoTakenAway } from "./report-photo.ts";

export type PhotoSize = { widthPx: number; heightPx: number };
export type ShownPhoto = { size: PhotoSize; takenAway: PhotoTakenAway | null };

/** What is known of the photos of published reports; those of drafts, and of withdrawn figures, the reader's role does not see. */
export async function listShownPhotos(
	photoIds: string[],
	db: Kysely<ReaderDB> = reader(),
): Promise<Record<string, ShownPhoto>> {
	if (photoIds.length === 0) return {};
	const rows = await db
		.selectFrom("publish.report_photo")
		.select(["report_photo_id", "width_px", "height_px", "taken_away_at", "taken_away_because"])
		.where("report_photo_id", "in", photoIds)
		.execute();
	return Object.fromEntries(
		rows.map((row) => [
			row.report_photo_id,
			{ size: { widthPx: row.width_px, heightPx: row.height_px }, takenAway: takenAwayOf(row) },
		]),
	);
}

export const takenAwayOf = (row: { taken_away_at: Date | null; taken_away_because: string | null }) =>
	row.taken_away_at && {
		at: row.taken_away_at.toISOString(),
		because: row.taken_away_because as PhotoReason,
	};

/** A photo of a published report, as the reader's role sees it: not of a draft, and not where the figures were withdrawn. */
export async function findReportPhoto(photoId: string, db: Kysely<ReaderDB> = reader()): Promise<Buffer | undefined> {
	if (!z.uuid().safeParse(photoId).success) return undefined;
	const row = await db
		.selectFrom("publish.report_photo")
		.select("bytes")
		.where("report_photo_id", "=", photoId)
		.executeTakeFirst();
	return row?.bytes ?? undefined;
}
