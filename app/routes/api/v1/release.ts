import type { Route } from "./+types/release";
import { env } from "#app/lib/env.server.ts";
import { releaseItem } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { ApiProblem } from "#app/publish/api/problem.ts";
import { findRelease, listRespondentsBands } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";

/** What is known of one release. A withdrawn one is told of too: that it was, when and why. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.release, args, async ({ params }) => {
		const release = await findRelease(params.release);
		if (!release) throw new ApiProblem("release_not_found");
		return {
			version: JSON.stringify(release),
			async body() {
				const bands = await listRespondentsBands();
				return { content: JSON.stringify(releaseItem(release, bands[release.releaseId] ?? null, env().BASE_URL)) };
			},
		};
	});
}
export const action = loader;
