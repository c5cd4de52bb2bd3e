import type { DrawnMap } from "./static-map.tsx";

type Drawn = Pick<DrawnMap, "areaOfCounty"> & {
	cells: { areaKey: string }[];
	picture: { counties: { fips: string }[] };
};

/** How many counties a map draws without a cell: the survey asked nobody there, or their district is none of those shown. */
export function countUnasked({ picture, areaOfCounty, cells }: Drawn, state: string | null = null): number {
	const known = new Set(cells.map(({ areaKey }) => areaKey));
	return picture.counties.filter(
		({ fips }) => !known.has(areaOfCounty[fips] ?? "") && (state === null || fips.startsWith(state)),
	).length;
}
