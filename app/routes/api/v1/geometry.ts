import type { Route } from "./+types/geometry";
import { areaItem } from "#app/publish/api/item-rows.ts";
import { operations } from "#app/publish/api/operations.ts";
import { areaShapes } from "#app/publish/area-shapes.server.ts";
import { listAreas } from "#app/publish/releases.server.ts";
import { answer } from "./parts/answer.server.ts";
import { requireKnown, standingRelease } from "./parts/list-answer.server.ts";

/** The outlines of a release's areas of one kind, to join figures to by `area_code`. Public geography, no figure. */
export function loader(args: Route.LoaderArgs) {
	return answer(operations.geometry, args, async ({ request, params, query: { kind, state } }) => {
		const { releaseId } = await standingRelease(params.release);
		const areas = await listAreas(releaseId);
		requireKnown(
			request,
			"state",
			state,
			areas.flatMap((area) => (area.kind === "state" ? [area.key] : [])),
		);
		return {
			version: releaseId,
			async body() {
				const features = areaShapes(areas, kind)
					.filter(({ area }) => !state || (area.stateFips !== null && state.includes(area.stateFips)))
					.map(({ area, shape }) => ({ type: "Feature", id: area.key, geometry: shape, properties: areaItem(area) }));
				return { content: JSON.stringify({ type: "FeatureCollection", features }) };
			},
		};
	});
}
export const action = loader;
