import type { Kysely } from "kysely";
import { z } from "zod";
import { reader, type ReaderDB } from "./reader.server.ts";

export type PhotoSize = { widthPx: number; heightPx: number };

/** How large the photos of published reports are; those of drafts, and of withdrawn figures, the reader's role does not see. */
export async function listPhotoSizes(
	photoIds: string[],
	db: Kysely<ReaderDB> = reader(),
): Promise<Record<string, PhotoSize>> {
	if (photoIds.length === 0) return {};
	const rows = await db
		.selectFrom("publish.report_photo")
		.select(["report_photo_id", "width_px", "height_px"])
		.where("report_photo_id", "in", photoIds)
		.execute();
	return Object.fromEntries(
		rows.map((row) => [row.report_photo_id, { widthPx: row.width_px, heightPx: row.height_px }]),
	);
}

/** A photo of a published report, as the reader's role sees it: not of a draft, and not where the figures were withdrawn. */
export async function findReportPhoto(photoId: string, db: Kysely<ReaderDB> = reader()): Promise<Buffer | undefined> {
	if (!z.uuid().safeParse(photoId).success) return undefined;
	const row = await db
		.selectFrom("publish.report_photo")
		.select("bytes")
		.where("report_photo_id", "=", photoId)
		.executeTakeFirst();
	return row?.bytes;
}
