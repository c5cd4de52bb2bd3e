import type { Measure } from "#app/collect/form.ts";
import { type WeighedAnswers, type WeighingInput, weighAnswers } from "#app/estimate/calibration/blocks.ts";
import { atOrBefore, weighedFigure } from "#app/estimate/calibration/weighed-figure.ts";
import { estimateWeighed } from "#app/estimate/calibration/weighed-survey.ts";
import type { CalibrationNote } from "#app/estimate/calibration/weighting.ts";
import type { AreasOfCounty } from "#app/estimate/survey.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { KeptTally } from "#app/tally/tally.ts";
import { type FigureOrigin, itemsOf, type OriginStratum } from "./figure-origin.ts";

/** `originOf` by calibrated weights, from the answers themselves. */
export function weighedOriginOf(
	input: WeighingInput & { tallies: readonly KeptTally[]; areasOfCounty: AreasOfCounty },
	{ areaKey, cropKey, measure }: { areaKey: string; cropKey: string; measure: Measure },
): FigureOrigin {
	const { areasOfCounty } = input;
	const tallies = input.tallies.filter((tally) => tally.measureKey === measure.key && tally.cropKey === cropKey);
	const counties = new Set(tallies.map(({ countyFips }) => countyFips));
	const { estimates } = estimateWeighed({ ...input, measure, cropKey, counties, areasOfCounty });
	const { joins = [], ...found } = estimates.find((one) => one.areaKey === areaKey) ?? {};
	const estimate = "areaKey" in found ? (found as NonNullable<FigureOrigin["estimate"]>) : null;
	const isInside = (countyFips: string) => areasOfCounty.get(countyFips)?.includes(areaKey) ?? false;
	const weighed = weighAnswers(input);
	const inside = weighed.answers.flatMap(({ countyFips }, i) => (isInside(countyFips) ? [i] : []));
	const summed = measure.kind === "day" ? atOrBefore(estimate?.value ?? 0) : undefined;
	const told = summed ?? (({ y, x }: { y: number; x: number }) => ({ y, x }));
	const figure = estimate?.standardError
		? weighedFigure(measure.kind === "day" ? "ratio" : measure.kind, weighed, inside, summed)
		: null;
	const placeOf = new Map(
		input.frame.map(({ stratumKey, stateFips, sizeClass }) => [stratumKey, { stateFips, sizeClass }]),
	);
	const partsOf = (keys: readonly string[]) => keys.map((key) => placeOf.get(key)!);
	const strata = strataOf(weighed, inside, { told, partsOf, variances: figure?.variances });
	const sumOf = (part: (i: number) => number) => inside.reduce((sum, i) => sum + weighed.weights[i]! * part(i), 0);
	return {
		estimate,
		joins: joins.map((join) => ({ ...join, parts: partsOf(join.stratumKeys) })),
		strata,
		otherStrata: weighed.strata.strata.filter(({ respondents }) => respondents > 0).length - strata.length,
		totals: {
			count: sumOf(() => 1),
			y: sumOf((i) => told(weighed.answers[i]!).y),
			x: sumOf((i) => told(weighed.answers[i]!).x),
		},
		items: itemsOf(tallies.filter(({ countyFips }) => isInside(countyFips))),
		calibrations: calibrationsOf(weighed, inside),
	};
}

type Told = (answer: WeighedAnswers["answers"][number]) => { y: number; x: number };

function strataOf(
	{ answers, strata, stratumOf, weights, designWeights }: WeighedAnswers,
	inside: readonly number[],
	{
		told,
		partsOf,
		variances,
	}: {
		told: Told;
		partsOf: (keys: readonly string[]) => OriginStratum["parts"];
		variances: ReadonlyMap<number, number> | undefined;
	},
): OriginStratum[] {
	const all = [...(variances?.values() ?? [])].reduce((sum, one) => sum + one, 0);
	return [...groupBy(inside, (i) => stratumOf[i]!)]
		.toSorted(([a], [b]) => a - b)
		.map(([at, own]) => {
			const { stratumKeys, frameSize, respondents } = strata.strata[at]!;
			const sums = own.map((i) => told(answers[i]!));
			return {
				stratumKeys,
				parts: partsOf(stratumKeys),
				frameSize,
				respondents,
				weight: designWeights[own[0]!]!,
				calibrated: { smallest: leastOf(own, weights), largest: -leastOf(own, weights, -1) },
				inArea: own.length,
				sumY: sums.reduce((sum, { y }) => sum + y, 0),
				sumX: sums.reduce((sum, { x }) => sum + x, 0),
				varianceShare: all > 0 ? (variances!.get(at) ?? 0) / all : null,
			};
		});
}

function leastOf(places: readonly number[], weights: readonly number[], sign = 1): number {
	return places.reduce((least, i) => Math.min(least, sign * weights[i]!), Infinity);
}

/** Of the blocks that hold answers of the area. */
function calibrationsOf(weighed: WeighedAnswers, inside: readonly number[]): CalibrationNote[] {
	const isInside = new Set(inside);
	return weighed.blocks.filter(({ members }) => members.some((i) => isInside.has(i))).map(({ note }) => note);
}
