import type { Moments } from "#app/lib/moments.ts";

// Tallies add by their moments: county to district to state to region, and a new answer to what is there.
export {
	addMoments as addTallies,
	emptyMoments,
	momentsOf as tallyOf,
	rawSums,
	sumMoments as sumTallies,
	type Moments,
} from "#app/lib/moments.ts";

/** One tally row: the moments of one measure over the operations of one crop, county and stratum. */
export type Tally = Moments & {
	measureKey: string;
	cropKey: string;
	countyFips: string;
	stateFips: string;
	stratumKey: string;
	/** Facts of this cell that were set aside in review. They are in none of the sums. */
	setAside: number;
};

/** The two largest contributions to a quantity, by owner; `second` is 0 where there is only one owner. */
export type Largest = { first: number; second: number };

/**
 * Who stands behind one tally row: distinct owners and the two largest contributions of each quantity.
 * These do not add. An owner of operations in two counties is one owner of the district, so counts and largest
 * contributions of a larger area come from a query over that area, never from adding these rows.
 */
export type TallyOwners = Pick<Tally, "measureKey" | "cropKey" | "countyFips" | "stateFips" | "stratumKey"> & {
	owners: number;
	largestY: Largest;
	largestX: Largest;
};

/**
 * A stratum of a survey's frame for one crop, as frozen at opening: a state's operations of one size class.
 * `sizeClass` is a rank that rises with size; `frameSize` counts the stratum's operations that have the crop.
 */
export type FrameStratum = { stratumKey: string; stateFips: string; sizeClass: number; frameSize: number };

/** How many operations answered about a crop in a stratum, in whichever county and to whichever measure. */
export type CropRespondents = { cropKey: string; stratumKey: string; respondents: number };

/**
 * Respondents of each stratum to the measure whose tallies are given: the n_h of the weights, over all counties.
 * An operation that answered the survey but not this question counts as not having answered, so that its weight
 * goes to the others of its stratum.
 * @param tallies all tallies of ONE measure and crop, of every county.
 */
export function respondentsByStratum(tallies: Iterable<Pick<Tally, "stratumKey" | "n">>): Map<string, number> {
	const respondents = new Map<string, number>();
	for (const { stratumKey, n } of tallies) respondents.set(stratumKey, (respondents.get(stratumKey) ?? 0) + n);
	return respondents;
}
