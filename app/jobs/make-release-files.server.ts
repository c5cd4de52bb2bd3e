import { scopedTransaction } from "#app/auth/scope.server.ts";
import { env } from "#app/lib/env.server.ts";
import { log } from "#app/lib/log.server.ts";
import { mailWords } from "#app/mail/words.server.ts";
import { findFileSource } from "#app/publish/files/file-source.server.ts";
import { makeFiles } from "#app/publish/files/make-files.server.ts";
import { hasFiles, keepFiles, listReleasesWithoutFiles } from "#app/release/files.server.ts";
import { queueJob } from "./queue.server.ts";

export const filesJobKey = (releaseId: string) => `make_release_files:${releaseId}`;

/**
 * Makes the files of a release from what the reader's role sees of it, and keeps them. Once made they stay as they are: a
 * second run changes nothing, and a withdrawn release gets none.
 */
export async function makeReleaseFiles({ releaseId }: { releaseId: string }): Promise<void> {
	if (await scopedTransaction({ kind: "none" }, (trx) => hasFiles(trx, releaseId))) return;
	const words = { en: await mailWords("en", "dataroom"), es: await mailWords("es", "dataroom") };
	const source = await findFileSource(releaseId, words, env().BASE_URL);
	if (!source) return;
	const files = await makeFiles(source);
	const outcome = await scopedTransaction({ kind: "none" }, (trx) => keepFiles(trx, releaseId, files));
	log.info({ releaseId, files: files.length, outcome }, "files of a release");
}

/** What the worker does when it starts: releases that were seeded, or published before there were files, get theirs. */
export async function queueMissingFiles(): Promise<void> {
	await scopedTransaction({ kind: "none" }, async (trx) => {
		for (const releaseId of await listReleasesWithoutFiles(trx)) {
			await queueJob(trx, "make_release_files", { releaseId }, { jobKey: filesJobKey(releaseId) });
		}
	});
}
