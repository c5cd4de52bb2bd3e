import type { Route } from "./+types/measures";
import { measureItem } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { listMeasures } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";
import { listAnswer, standingRelease } from "./parts/list-answer.server.ts";

/** The measures of a release, in its own order. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.measures, args, async (asked) => {
		const { releaseId } = await standingRelease(asked.params.release);
		return listAnswer(operations.measures, asked, releaseId, async () => ({
			rows: (await listMeasures(releaseId)).map(measureItem),
		}));
	});
}
export const action = loader;
