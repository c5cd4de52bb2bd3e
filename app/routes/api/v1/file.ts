import type { Route } from "./+types/file";
import { countTaken } from "#app/auth/taken-files.server.ts";
import { operations } from "#app/publish/api/operations.ts";
import { ApiProblem } from "#app/publish/api/problem.ts";
import { listFiles } from "#app/publish/release-files.server.ts";
import { savedName, serveFile } from "#app/publish/serve-file.server.ts";
import { answer } from "./parts/answer.server.ts";
import { standingRelease } from "./parts/list-answer.server.ts";

/** One file of a release, whole or in part. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.file, args, async ({ request, params }) => {
		const release = await standingRelease(params.release);
		const files = await listFiles(release.releaseId);
		if (files.length === 0) throw new ApiProblem("files_not_ready", [], { "retry-after": "60" });
		const file = files.find(({ name }) => name === params.file);
		if (!file) throw new ApiProblem("file_not_found");
		const name = savedName(release.number, file.name);
		const response = await serveFile(request, release.releaseId, file, { name, visibility: "public" });
		const outside = response.headers.get("content-range");
		if (response.status === 416 && outside)
			throw new ApiProblem(
				"range_outside",
				[{ parameter: "range", code: "range", values: { last: file.byteCount - 1 } }],
				{ "content-range": outside, "accept-ranges": "bytes" },
			);
		countTaken(request, response, release.releaseId, file.name);
		return { response };
	});
}
export const action = loader;
