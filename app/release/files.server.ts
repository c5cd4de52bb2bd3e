import { createHash } from "node:crypto";
import type { Trx } from "#app/auth/scope.server.ts";

type MadeFile = { name: string; mediaType: string; content: Uint8Array };

/** Releases that stand without files: published a moment ago, or before there were any. */
export async function listReleasesWithoutFiles(trx: Trx): Promise<string[]> {
	const rows = await trx
		.selectFrom("release.release as r")
		.leftJoin("release.file as f", "f.release_id", "r.release_id")
		.leftJoin("release.withdrawal as w", "w.release_id", "r.release_id")
		.select("r.release_id")
		.where("f.release_id", "is", null)
		.where("w.release_id", "is", null)
		.orderBy("r.number")
		.execute();
	return rows.map((row) => row.release_id);
}

export async function hasFiles(trx: Trx, releaseId: string): Promise<boolean> {
	const row = await trx
		.selectFrom("release.file")
		.select("name")
		.where("release_id", "=", releaseId)
		.limit(1)
		.executeTakeFirst();
	return row !== undefined;
}

/**
 * Keeps the files of a release for good, all or none, in the caller's transaction. What two workers make at once is kept
 * once: the second waits for the first and then changes nothing.
 */
export async function keepFiles(trx: Trx, releaseId: string, files: readonly MadeFile[]): Promise<"kept" | "had"> {
	for (const [position, { name, mediaType, content }] of files.entries()) {
		const { numInsertedOrUpdatedRows } = await trx
			.insertInto("release.file")
			.values({
				release_id: releaseId,
				name,
				position,
				media_type: mediaType,
				content: Buffer.from(content),
				byte_count: content.length,
				sha256: createHash("sha256").update(content).digest("hex"),
			})
			.onConflict((conflict) => conflict.doNothing())
			.executeTakeFirst();
		// The first one of a set is the archive; who finds it there finds all of them.
		if (numInsertedOrUpdatedRows === 0n && position === 0) return "had";
	}
	return "kept";
}
