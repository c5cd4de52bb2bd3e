import type { Route } from "./+types/files";
import { env } from "#app/lib/env.server.ts";
import { fileItem } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { listFiles } from "#app/publish/release-files.server.ts";
import { answer } from "./parts/answer.server.ts";
import { listAnswer, standingRelease } from "./parts/list-answer.server.ts";

/** The files of a release with size and checksum; an empty list in the minute in which they are made. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.files, args, async (asked) => {
		const { releaseId, number } = await standingRelease(asked.params.release);
		const files = await listFiles(releaseId);
		const folder = `${env().BASE_URL}/api/v1/releases/${number}/files`;
		return listAnswer(operations.files, asked, `${releaseId} ${files.length}`, async () => ({
			rows: files.map((file) => fileItem(file, folder)),
		}));
	});
}
export const action = loader;
