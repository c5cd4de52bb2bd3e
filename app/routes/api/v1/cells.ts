import type { Route } from "./+types/cells";
import { pageOfBlocks } from "#app/publish/api/cell-blocks.server.ts";
import { listCellPage } from "#app/publish/api/list-cells.server.ts";
import { operations } from "#app/publish/api/operations.ts";
import { listAreas, listCrops, listMeasures } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";
import { listAnswer, requireKnown, standingRelease } from "./parts/list-answer.server.ts";

/** The rows of cells.csv, as many as are asked for, in the same order. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.cells, args, async (asked) => {
		const release = await standingRelease(asked.params.release);
		const { releaseId } = release;
		const { measure, crop, area, state } = asked.query;
		if (measure)
			requireKnown(
				asked.request,
				"measure",
				measure,
				(await listMeasures(releaseId)).map(({ key }) => key),
			);
		if (crop) requireKnown(asked.request, "crop", crop, await listCrops(releaseId));
		if (area || state) {
			const areas = await listAreas(releaseId);
			requireKnown(
				asked.request,
				"area",
				area,
				areas.map(({ key }) => key),
			);
			requireKnown(
				asked.request,
				"state",
				state,
				areas.flatMap(({ kind, key }) => (kind === "state" ? [key] : [])),
			);
		}
		return listAnswer(operations.cells, asked, releaseId, async (after) => {
			const cut = asked.type === "application/json" ? await pageOfBlocks(release, asked.query, after) : null;
			return cut ?? listCellPage(release, asked.query, after);
		});
	});
}
export const action = loader;
