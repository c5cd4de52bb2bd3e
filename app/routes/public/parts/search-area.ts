import { redirect } from "react-router";
import { areasNamed } from "#app/publish/areas-named.ts";
import type { MapCell } from "#app/publish/cell.ts";

export type FoundArea = Pick<MapCell, "areaKey" | "areaName" | "kind">;
/** What was typed to find an area by, and the areas that it may mean where that is not just one. */
export type AreaSearch = { typed: string; areas: FoundArea[]; more: boolean };

const most = 12;

/**
 * Finds the area that a map is asked for by name.
 * @returns null where none is asked for.
 * @throws a redirect to the same map with the area chosen where the name is one area's; with none chosen for no name.
 */
export function searchArea(
	url: string,
	typed: string | undefined,
	cells: FoundArea[],
	nameOf: (area: FoundArea) => string,
): AreaSearch | null {
	if (typed === undefined) return null;
	const byKey = new Map(cells.map((cell) => [cell.areaKey, cell]));
	const found = areasNamed([...byKey.values()], typed, nameOf);
	if (found.length !== 1 && typed !== "")
		return { typed, areas: found.slice(0, most).map(named), more: found.length > most };
	const { pathname, searchParams } = new URL(url);
	for (const key of ["find", "area"]) searchParams.delete(key);
	if (found[0]) searchParams.set("area", found[0].areaKey);
	throw redirect(`${pathname}?${searchParams}`);
}

const named = ({ areaKey, areaName, kind }: FoundArea): FoundArea => ({ areaKey, areaName, kind });
