import { isContiguous } from "#app/lib/geography/neighbors.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { Problem } from "#app/lib/parse-form.ts";

/** The name of the district that each county of a state is in; counties not in it are told by themselves. */
export type DistrictNames = ReadonlyMap<string, string>;
/** A group of counties with its name, counties in ascending order. */
export type NamedDistrict = { name: string; counties: string[] };

/** Groups counties by the name that stands beside each, in the order of their first counties. */
export function districtsOf(names: DistrictNames): NamedDistrict[] {
	const counties = [...names].toSorted(([a], [b]) => (a < b ? -1 : 1));
	return [...groupBy(counties, ([, name]) => name)].map(([name, list]) => ({
		name,
		counties: list.map(([county]) => county),
	}));
}

/**
 * Gives groups of counties names: that of the present district of which most lies in the group, if no other group has it,
 * else one made from the group's first county. A county alone has none.
 */
export function nameDistricts(
	groups: readonly (readonly string[])[],
	now: DistrictNames,
	nameOfCounty: ReadonlyMap<string, string>,
	madeName: (county: string) => string,
): Map<string, string> {
	const taken = new Set<string>();
	const named = groups
		.filter((group) => group.length > 1)
		.map((group) => ({ group, share: largestShare(group, now) }))
		.toSorted((a, b) => b.share.counties - a.share.counties || (a.group[0]! < b.group[0]! ? -1 : 1))
		.map(({ group, share }) => {
			const own = share.name !== undefined && !taken.has(share.name) ? share.name : undefined;
			const name = own ?? firstFree(group, (county) => madeName(nameOfCounty.get(county) ?? county), taken);
			taken.add(name);
			return group.map((county) => [county, name] as const);
		});
	return new Map(named.flat());
}

function largestShare(group: readonly string[], now: DistrictNames): { name: string | undefined; counties: number } {
	const parts = groupBy(
		group.filter((county) => now.has(county)),
		(county) => now.get(county)!,
	);
	const [largest] = [...parts].toSorted(([, a], [, b]) => b.length - a.length);
	return { name: largest?.[0], counties: largest?.[1].length ?? 0 };
}

function firstFree(group: readonly string[], made: (county: string) => string, taken: ReadonlySet<string>): string {
	const names = group.map(made);
	return names.find((name) => !taken.has(name)) ?? names.join(", ");
}

/** What is wrong with a grouping, beside the counties that it is wrong of: a district of one, or of counties that are apart. */
export function districtProblems(names: DistrictNames, neighborsOf: ReadonlyMap<string, readonly string[]>): Problem[] {
	return districtsOf(names).flatMap(({ counties }) => {
		const code =
			counties.length === 1 ? "district_single" : isContiguous(counties, neighborsOf) ? undefined : "district_apart";
		return code ? counties.map((county) => ({ field: `district.${county}`, code })) : [];
	});
}
