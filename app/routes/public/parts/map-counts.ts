import type { Counted } from "#app/components/map/legend-entries.ts";
import { countUnasked } from "#app/components/map/unasked.ts";
import type { MapFigures } from "#app/publish/figures.server.ts";
import { inState } from "#app/publish/map-choice.ts";
import type { Picture } from "#app/publish/picture.server.ts";

/** What a map's legend counts: the areas of the state that it is zoomed to, or all. */
export function countedOn(
	figures: Pick<MapFigures, "cells" | "areaOfCounty" | "kind">,
	picture: Pick<Picture, "counties">,
	state: string | null,
): Counted {
	const unasked = countUnasked({ ...figures, picture }, state);
	return { cells: inState(figures.cells, state), unasked, ofDistricts: figures.kind === "district" };
}
