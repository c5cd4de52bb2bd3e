import { medianOf, quantileOf } from "#app/lib/order-statistics.ts";

/** One operation's quantity last season and this, in the same unit; null where it was not answered. */
export type SeasonPair = { key: string; last: number | null; now: number | null };

/** How far one operation's ratio lies from the usual one, and how much that matters. */
export type RatioEffect = {
	key: string;
	/** This season over last. */
	ratio: number;
	/** 0 at the centre, and as far below it for half as above it for double. */
	distance: number;
	/** The distance times the size of the operation to the power of `sizePower`. */
	effect: number;
};

export type RatioOptions = {
	/** The ratio that is usual; the median of the pairs unless given. */
	centre?: number;
	/** How much size counts: 0 not at all, 1 in full. */
	sizePower?: number;
	/** How many quartile distances from the median are still usual. */
	reach?: number;
	/** Least quartile distance as a share of the median effect. It binds only where the centre is given from outside. */
	leastShare?: number;
};

/** The effects' quartiles and the bounds drawn from them; effects outside the bounds are flagged. */
export type RatioBounds = {
	lowerQuartile: number;
	median: number;
	upperQuartile: number;
	lowerDistance: number;
	upperDistance: number;
	lower: number;
	upper: number;
	flagged: string[];
};

/**
 * The effect of each pair whose two quantities are above 0; other pairs have no ratio and are named in `notTested`.
 * @returns `centre` is null where no pair can be tested.
 * @throws {RangeError} when a given centre or a quantity is not finite, or the centre not above 0.
 * Source: Hidiroglou and Berthelot, Statistical editing and imputation for periodic business surveys, Survey Methodology
 * 12 (1986), from memory; formula 18 of the reference set.
 */
export function ratioEffects(
	pairs: readonly SeasonPair[],
	{ centre, sizePower = 0.5 }: RatioOptions = {},
): { centre: number | null; effects: RatioEffect[]; notTested: string[] } {
	const notTested = pairs.filter((pair) => !isTestable(pair)).map(({ key }) => key);
	const testable = pairs.filter(isTestable);
	if (testable.length === 0) return { centre: centre ?? null, effects: [], notTested };
	const usual = centre ?? medianOf(testable.map(({ last, now }) => now / last));
	if (!(usual > 0 && Number.isFinite(usual))) throw new RangeError(`${usual} cannot be the usual ratio`);
	const effects = testable.map(({ key, last, now }) => {
		const ratio = now / last;
		const distance = ratio < usual ? 1 - usual / ratio : ratio / usual - 1;
		return { key, ratio, distance, effect: distance * Math.max(last, now) ** sizePower };
	});
	return { centre: usual, effects, notTested };
}

type TestablePair = { key: string; last: number; now: number };

function isTestable(pair: SeasonPair): pair is TestablePair {
	return pair.last !== null && pair.now !== null && pair.last > 0 && pair.now > 0;
}

/**
 * The bounds of a group's effects: median less and plus `reach` quartile distances, each side by its own quartile.
 * @param effects one or more, as `ratioEffects` gives them.
 * @throws {RangeError} for none.
 */
export function ratioBounds(
	effects: readonly RatioEffect[],
	{ reach = 4, leastShare = 0.05 }: RatioOptions = {},
): RatioBounds {
	const values = effects.map(({ effect }) => effect);
	const [lowerQuartile, median, upperQuartile] = [0.25, 0.5, 0.75].map((p) => quantileOf(values, p)) as [
		number,
		number,
		number,
	];
	const least = leastShare * Math.abs(median);
	const lowerDistance = Math.max(median - lowerQuartile, least);
	const upperDistance = Math.max(upperQuartile - median, least);
	const lower = median - reach * lowerDistance;
	const upper = median + reach * upperDistance;
	const flagged = effects.filter(({ effect }) => effect < lower || effect > upper).map(({ key }) => key);
	return { lowerQuartile, median, upperQuartile, lowerDistance, upperDistance, lower, upper, flagged };
}

export type RatioFindings = {
	/** Why the group as a whole was not tested, or null. */
	untested: "few_pairs" | "many_alike" | null;
	flagged: RatioEffect[];
	notTested: string[];
	centre: number | null;
};

/**
 * Operations whose quantity changed from last season as no other's of their group did, weighing large ones more.
 * A group is left untested where fewer than `fewestPairs` can be compared, and where so many changed alike that a
 * quartile falls on the median: every other operation on that side would be flagged.
 * @param pairs one group: operations of one crop that can be expected to fare alike.
 */
export function findOddRatios(
	pairs: readonly SeasonPair[],
	{ fewestPairs = 8, ...options }: RatioOptions & { fewestPairs?: number } = {},
): RatioFindings {
	const { centre, effects, notTested } = ratioEffects(pairs, options);
	const group = { centre, notTested, flagged: [] };
	if (effects.length < Math.max(1, fewestPairs)) return { ...group, untested: "few_pairs" };
	const { lowerDistance, upperDistance, flagged } = ratioBounds(effects, options);
	if (lowerDistance === 0 || upperDistance === 0) return { ...group, untested: "many_alike" };
	const keys = new Set(flagged);
	return { ...group, untested: null, flagged: effects.filter(({ key }) => keys.has(key)) };
}
