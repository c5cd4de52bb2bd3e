import type { Measure } from "#app/collect/form.ts";
import type { CalibrationNote } from "#app/estimate/calibration/weighting.ts";
import { type DomainStratum, domainStrata, domainTotals } from "#app/estimate/domain.ts";
import { type Linearized, linearize } from "#app/estimate/linearize.ts";
import { histogramStrata, sharesAtOrBelow } from "#app/estimate/quantile.ts";
import { itemResponseRate } from "#app/estimate/response-rate.ts";
import { type Join, joinStrata, respondentsByStratum } from "#app/estimate/strata.ts";
import { type AreaEstimate, type AreasOfCounty, estimateSurvey } from "#app/estimate/survey.ts";
import { linearizedVariance } from "#app/estimate/variance.ts";
import type { FrameStratum, KeptTally } from "#app/tally/tally.ts";

type OriginInputs = {
	frame: readonly (FrameStratum & { cropKey: string })[];
	tallies: readonly KeptTally[];
	areasOfCounty: AreasOfCounty;
};

/** One stratum's part in a figure. N_h, n_h and w_h are of the whole stratum, the rest of its answers in the area. */
export type OriginStratum = {
	stratumKeys: string[];
	/** The state and size class of each key. */
	parts: { stateFips: string; sizeClass: number }[];
	frameSize: number;
	respondents: number;
	weight: number;
	/** Where weights were calibrated, those of the area's answers; without, each has the stratum's. */
	calibrated?: { smallest: number; largest: number };
	inArea: number;
	sumY: number;
	sumX: number;
	/** Of the figure's variance, 0 to 1; null where there is none. */
	varianceShare: number | null;
};

export type FigureOrigin = {
	/** Null where no answer of the area bears on the measure. */
	estimate: Omit<AreaEstimate, "joins"> | null;
	joins: (Join & { parts: OriginStratum["parts"] })[];
	strata: OriginStratum[];
	/** Strata of the design in which the area has no answer: they count as zeros. */
	otherStrata: number;
	/** Weighted sums over the area, in the canonical units of the measure's questions; of days, y is those at or before the median. */
	totals: { count: number; y: number; x: number };
	items: { used: number; setAside: number; unanswered: number; rate: number | null };
	/** How calibrated weights came about, in the states that hold answers of the area; none by design weights. */
	calibrations: CalibrationNote[];
};

/** How the figure of one measure and crop in one area comes about, number by number, from the tallies that it is made of. */
export function originOf(
	{ frame, tallies: all, areasOfCounty }: OriginInputs,
	{ areaKey, cropKey, measure }: { areaKey: string; cropKey: string; measure: Measure },
): FigureOrigin {
	const tallies = all.filter((tally) => tally.measureKey === measure.key && tally.cropKey === cropKey);
	const { estimates } = estimateSurvey({ measures: [measure], frame, tallies, areasOfCounty });
	const found = estimates.find((one) => one.areaKey === areaKey);
	const inArea = tallies.filter((tally) => areasOfCounty.get(tally.countyFips)?.includes(areaKey));
	const ofCrop = frame.filter((stratum) => stratum.cropKey === cropKey);
	const joined = joinStrata(ofCrop, respondentsByStratum(tallies));
	const isDay = measure.kind === "day";
	// A median rests on how many lie at or before it: y counts those, x all.
	const domain = isDay
		? sharesAtOrBelow(histogramStrata(joined, inArea), found?.value ?? 0)
		: domainStrata(joined, inArea);
	const design = joined.strata.filter((stratum) => stratum.respondents > 0);
	const shares = varianceShares(
		domain,
		found?.standardError ? linearize(measure.kind === "day" ? "ratio" : measure.kind, domain) : null,
	);
	const placeOf = new Map(ofCrop.map(({ stratumKey, stateFips, sizeClass }) => [stratumKey, { stateFips, sizeClass }]));
	const partsOf = (keys: readonly string[]) => keys.map((key) => placeOf.get(key)!);
	const strata = domain.flatMap(({ domain: { n, sumY, sumX }, weight }, at) => {
		const { stratumKeys, frameSize, respondents } = design[at]!;
		const whole = { stratumKeys, parts: partsOf(stratumKeys), frameSize, respondents, weight };
		return n > 0 ? [{ ...whole, inArea: n, sumY, sumX, varianceShare: shares[at] ?? null }] : [];
	});
	const { count, totalY, totalX } = domainTotals(domain);
	const { joins = [], ...estimate } = found ?? {};
	return {
		estimate: found ? (estimate as Omit<AreaEstimate, "joins">) : null,
		joins: joins.map((join) => ({ ...join, parts: partsOf(join.stratumKeys) })),
		strata,
		otherStrata: design.length - strata.length,
		totals: { count, y: totalY, x: totalX },
		items: itemsOf(inArea),
		calibrations: [],
	};
}

function varianceShares(domain: readonly DomainStratum[], linearized: Linearized | null): number[] {
	if (!linearized) return [];
	const variances = domain.map((stratum) => linearizedVariance([stratum], linearized));
	const sum = variances.reduce((total, variance) => total + variance, 0);
	return variances.map((variance) => variance / sum);
}

/** How many answers a figure could use, of those that bear on it. */
export function itemsOf(tallies: readonly KeptTally[]): FigureOrigin["items"] {
	const sum = (key: "n" | "setAside" | "unanswered") => tallies.reduce((total, tally) => total + tally[key], 0);
	const items = { used: sum("n"), setAside: sum("setAside"), unanswered: sum("unanswered") };
	// The tallies count what gave no usable answer in one number, whether not known, refused or left blank.
	const counts = { given: items.used + items.setAside, blank: items.unanswered, dontKnow: 0, refused: 0, notAsked: 0 };
	return { ...items, rate: itemResponseRate(counts) };
}
