import { neighbors } from "topojson-client";
import { countyGeometries, type UsTopology } from "./counties.ts";

/**
 * For every county the FIPS codes of those it shares a border with, over state lines too, in ascending order. Counties
 * that touch in one point only, or across water that the outline leaves out, do not count as neighbours.
 */
export function listNeighbors(topology: UsTopology): Map<string, string[]> {
	const geometries = countyGeometries(topology);
	const touching = neighbors(geometries);
	return new Map(
		geometries.map(({ id }, index) => [
			id,
			(touching[index] ?? []).map((other) => geometries[other]?.id ?? "").toSorted(),
		]),
	);
}

/** Whether the areas hang together: each can be reached from the first by steps between neighbours inside the group. */
export function isContiguous(areas: readonly string[], neighborsOf: ReadonlyMap<string, readonly string[]>): boolean {
	const open = new Set(areas);
	const queue = areas.slice(0, 1);
	for (let area = queue.pop(); area !== undefined; area = queue.pop()) {
		if (!open.delete(area)) continue;
		queue.push(...(neighborsOf.get(area) ?? []).filter((neighbor) => open.has(neighbor)));
	}
	return open.size === 0;
}
