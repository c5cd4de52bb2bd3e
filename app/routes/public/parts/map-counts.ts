import type { Counted } from "#app/components/map/legend-entries.ts";
import type { MapFigures } from "#app/publish/figures.server.ts";
import { inState } from "#app/publish/map-choice.ts";

/**
 * What a map's legend counts: the areas of the state that it is zoomed to, or all. Counties of the release that its survey
 * has no cell for were not asked; in the map of districts they are not counted.
 */
export function countedOn(figures: Pick<MapFigures, "cells" | "areaOfCounty" | "kind">, state: string | null): Counted {
	const { cells, areaOfCounty, kind } = figures;
	const known = new Set(cells.map(({ areaKey }) => areaKey));
	const without = Object.entries(areaOfCounty).filter(
		([fips, key]) => (!key || !known.has(key)) && (state === null || fips.startsWith(state)),
	);
	return { cells: inState(cells, state), notAsked: kind === "county" ? without.length : 0 };
}
