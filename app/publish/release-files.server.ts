import { sql } from "kysely";
import { reader } from "./reader.server.ts";

export type FileFacts = { name: string; mediaType: string; byteCount: number; sha256: string };

/** The files of a release in their order; none while they are being made, and none of a withdrawn one. */
export async function listFiles(releaseId: string): Promise<FileFacts[]> {
	return reader()
		.selectFrom("release.file")
		.select(["name", "media_type as mediaType", "byte_count as byteCount", "sha256"])
		.where("release_id", "=", releaseId)
		.orderBy("position")
		.execute();
}

/** Bytes of a file from `first` to `last`, both counted from 0 and included. */
export async function readFilePart(
	releaseId: string,
	name: string,
	{ first, last }: { first: number; last: number },
): Promise<Buffer> {
	const row = await reader()
		.selectFrom("release.file")
		.select(sql<Buffer>`substring(content from ${first + 1}::int for ${last - first + 1}::int)`.as("part"))
		.where("release_id", "=", releaseId)
		.where("name", "=", name)
		.executeTakeFirstOrThrow();
	return row.part;
}
