import type { Route } from "./+types/areas";
import { pageOfList } from "#app/publish/api/cursor.server.ts";
import { areaItem } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { listAreas } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";
import { listAnswer, standingRelease } from "./parts/list-answer.server.ts";

/** The areas of a release by their codes. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.areas, args, async (asked) => {
		const { releaseId } = await standingRelease(asked.params.release);
		const { kind, state, limit } = asked.query;
		return listAnswer(operations.areas, asked, releaseId, async (after) => {
			const areas = (await listAreas(releaseId))
				.filter((area) => !kind || kind.includes(area.kind))
				.filter(({ stateFips }) => !state || (stateFips !== null && state.includes(stateFips)))
				.toSorted((a, b) => (a.key < b.key ? -1 : 1));
			const { rows, last } = pageOfList(areas, ({ key }) => key, { after, limit });
			return { rows: rows.map(areaItem), last };
		});
	});
}
export const action = loader;
