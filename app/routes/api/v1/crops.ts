import type { Route } from "./+types/crops";
import { cropItem } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { listCrops } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";
import { listAnswer, standingRelease } from "./parts/list-answer.server.ts";

/** The crops of a release, all crops together first. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.crops, args, async (asked) => {
		const { releaseId } = await standingRelease(asked.params.release);
		return listAnswer(operations.crops, asked, releaseId, async () => ({
			rows: (await listCrops(releaseId)).map((crop) => cropItem(crop, asked.words)),
		}));
	});
}
export const action = loader;
