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

/**
 * One tally row: the moments of one measure over the operations of one crop, county and stratum.
 * It does not count owners: an owner of operations in two counties is one owner of the district, so owners and their
 * largest contributions do not add, and are asked of each area by a query of its own.
 */
export type Tally = Moments & {
	measureKey: string;
	cropKey: string;
	countyFips: string;
	stateFips: string;
	stratumKey: string;
	/** Facts of this cell that were set aside in review. They are in none of the sums. */
	setAside: number;
};

/** A histogram of days of the year: how many operations told each. */
export type DayCount = { value: number; n: number };

/**
 * A tally as the database keeps it. Owners and their two largest sums of y are those of this one cell: they are for a look
 * at the cell, and `listOwnerShares` counts them for each area.
 */
export type KeptTally = Tally & {
	owners: number;
	/** What the owner with most has, and the next: sums of y over the owner's operations; 0 where there is none. */
	largestY: number;
	secondY: number;
	/** For a measure of days alone, days rising; null for others and where nobody told one. */
	days: DayCount[] | null;
	/** Operations that were asked and gave no answer that the measure could use: don't know, refused or left blank. */
	unanswered: number;
};

/**
 * A stratum of a survey's frame for one crop, as frozen at opening: a state's operations of one size class.
 * `sizeClass` is a rank that rises with size; `frameSize` counts the stratum's operations that have the crop.
 */
export type FrameStratum = { stratumKey: string; stateFips: string; sizeClass: number; frameSize: number };

/** How many operations answered about a crop in a stratum, in whichever county and to whichever measure. */
export type CropRespondents = { cropKey: string; stratumKey: string; respondents: number };

/** What a county and stratum of a survey's frame has of a crop: how many operations, and their bearing trees at opening. */
export type FrameCell = {
	countyFips: string;
	stratumKey: string;
	operations: number;
	bearingTrees: number;
};

/** What one operation told of a measure and crop, with the bearing trees that the frame has of it. */
export type ToldAnswer = Pick<FrameCell, "countyFips" | "stratumKey" | "bearingTrees"> & {
	operationId: string;
	y: number;
	x: number;
};
