import { addMoments, emptyMoments, type Moments } from "#app/lib/moments.ts";
import type { Tally } from "#app/tally/tally.ts";
import type { JoinedStratum, StrataFrame } from "#app/estimate/strata.ts";

/**
 * One stratum of the design seen from a domain (an area, or any part of the respondents).
 * `respondents` counts the whole stratum, `domain` only those inside the domain: operations outside enter every
 * formula as zeros, and leaving them out would make small domains look too certain.
 */
export type DomainStratum = {
	/** Operations that one respondent stands for: N_h / n_h, or a weight given from outside. */
	weight: number;
	/** n_h / N_h, between 0 and 1; 0 leaves out the finite population correction, 1 is a full count. */
	samplingFraction: number;
	respondents: number;
	domain: Moments;
};

/** Sums over operations of the domain that share one weight. */
export type WeightedMoments = Pick<DomainStratum, "weight" | "domain">;

/** What of a tally row the strata need. */
export type StratumTally = Moments & Pick<Tally, "stratumKey">;

/** Weighted count and totals of a domain, with its plain count of respondents. */
export type DomainTotals = { respondents: number; count: number; totalY: number; totalX: number };

/**
 * The strata of a measure and crop, seen from the area whose tallies are given.
 * @param frame the joined strata of the whole network.
 * @param tallies the area's tally rows of that measure and crop; none is an area without respondents.
 * @returns every stratum that has respondents, also those with nobody in the area.
 * @throws {RangeError} when a tally's stratum is not in the frame, or the area has more respondents than the stratum.
 */
export function domainStrata(frame: StrataFrame, tallies: Iterable<StratumTally>): DomainStratum[] {
	const inside = insideStrata(frame, tallies);
	return frame.strata
		.map((stratum, i) => seenFrom(stratum, inside.get(i) ?? emptyMoments))
		.filter(({ respondents }) => respondents > 0);
}

/**
 * Those of `domainStrata` that hold somebody of the area, in the same order. To totals and variances the others add nothing,
 * and a county lies in a few of hundreds.
 */
export function strataWithin(frame: StrataFrame, tallies: Iterable<StratumTally>): DomainStratum[] {
	const inside = [...insideStrata(frame, tallies)].toSorted(([one], [other]) => one - other);
	return inside.map(([i, moments]) => seenFrom(frame.strata[i]!, moments));
}

/** The moments of an area's respondents by their stratum's place in the frame. */
function insideStrata(frame: StrataFrame, tallies: Iterable<StratumTally>): Map<number, Moments> {
	const places = placesIn(frame);
	const inside = new Map<number, Moments>();
	for (const tally of tallies) {
		if (tally.n === 0) continue;
		const i = places.get(tally.stratumKey);
		if (i === undefined) throw new RangeError(`stratum ${tally.stratumKey} has a tally but is not in the frame`);
		inside.set(i, addMoments(inside.get(i) ?? emptyMoments, tally));
	}
	return inside;
}

/** Told once a frame, as thousands of areas are looked at with one. */
const knownPlaces = new WeakMap<StrataFrame, Map<string, number>>();

function placesIn(frame: StrataFrame): Map<string, number> {
	let places = knownPlaces.get(frame);
	if (!places) {
		places = new Map(frame.strata.flatMap(({ stratumKeys }, i) => stratumKeys.map((key) => [key, i] as const)));
		knownPlaces.set(frame, places);
	}
	return places;
}

function seenFrom({ stratumKeys, frameSize, respondents }: JoinedStratum, domain: Moments): DomainStratum {
	if (domain.n > respondents) {
		throw new RangeError(`stratum ${stratumKeys.join("+")} has ${respondents} respondents, its area ${domain.n}`);
	}
	return { weight: frameSize / respondents, samplingFraction: respondents / frameSize, respondents, domain };
}

/** Weighted totals of a domain. `count` estimates its operations on the frame; all are 0 where nobody answered. */
export function domainTotals(strata: readonly WeightedMoments[]): DomainTotals {
	const totals = { respondents: 0, count: 0, totalY: 0, totalX: 0 };
	for (const { weight, domain } of strata) {
		totals.respondents += domain.n;
		totals.count += weight * domain.n;
		totals.totalY += weight * domain.sumY;
		totals.totalX += weight * domain.sumX;
	}
	return totals;
}

/** Degrees of freedom of the domain by itself: its respondents less the strata that hold them. Can be 0. */
export function domainDegreesOfFreedom(strata: readonly DomainStratum[]): number {
	const present = strata.filter((stratum) => stratum.domain.n > 0);
	return present.reduce((sum, stratum) => sum + stratum.domain.n, 0) - present.length;
}

/** Degrees of freedom of the whole design: all respondents less the strata. */
export function designDegreesOfFreedom(strata: readonly DomainStratum[]): number {
	return strata.reduce((sum, stratum) => sum + stratum.respondents, 0) - strata.length;
}
