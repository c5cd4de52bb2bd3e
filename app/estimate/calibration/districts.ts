import { calibrationLimits } from "#app/estimate/calibration/weighting.ts";

/** Counties that are in no district, and districts with too few answers. */
export const restOfState = "rest";

/** How many operations the frame has there, and how many of them answered. */
export type CountyCount = { countyFips: string; operations: number; respondents: number };

/**
 * The groups that operations are counted in by place: districts, those with too few answers taken together with the counties
 * of no district, and where these are still too few, with the smallest of the others.
 * @returns the group of each county, and which districts were taken together.
 */
export function groupDistricts(
	counties: readonly CountyCount[],
	districtOf: ReadonlyMap<string, string | null>,
	fewest: number = calibrationLimits.fewestInDistrict,
): { groupOf: Map<string, string>; takenTogether: string[] } {
	const keyOf = ({ countyFips }: CountyCount) => districtOf.get(countyFips) ?? restOfState;
	const counts = new Map<string, { operations: number; respondents: number }>();
	for (const county of counties) {
		const { operations, respondents } = counts.get(keyOf(county)) ?? { operations: 0, respondents: 0 };
		counts.set(keyOf(county), {
			operations: operations + county.operations,
			respondents: respondents + county.respondents,
		});
	}
	const bySize = [...counts]
		.filter(([key]) => key !== restOfState)
		.toSorted(([a, left], [b, right]) => left.respondents - right.respondents || (a < b ? -1 : 1));
	const rest = counts.get(restOfState) ?? { operations: 0, respondents: 0 };
	let { operations, respondents } = rest;
	const together = new Set<string>();
	for (const [key, count] of bySize) {
		const restIsThin = operations > 0 && respondents < fewest;
		if (count.operations === 0 || (count.respondents >= fewest && !restIsThin)) continue;
		together.add(key);
		operations += count.operations;
		respondents += count.respondents;
	}
	const groupOf = counties.map((county): [string, string] => {
		const key = keyOf(county);
		return [county.countyFips, together.has(key) ? restOfState : key];
	});
	return { groupOf: new Map(groupOf), takenTogether: [...together].toSorted() };
}
