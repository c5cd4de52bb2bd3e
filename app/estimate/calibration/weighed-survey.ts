import { type WeighedAnswers, type WeighingInput, weighAnswers } from "#app/estimate/calibration/blocks.ts";
import { cellParts, dayParts } from "#app/estimate/calibration/weighed-figure.ts";
import type { CalibrationNote } from "#app/estimate/calibration/weighting.ts";
import { cellOf } from "#app/estimate/cell.ts";
import { dayOf } from "#app/estimate/days.ts";
import type { SteadinessCutOffs } from "#app/estimate/steadiness.ts";
import {
	type AreaEstimate,
	type AreasOfCounty,
	inUnitOf,
	rangeOf,
	type SurveyEstimates,
	type SurveyMeasure,
} from "#app/estimate/survey.ts";

/** How the weights of a crop came about in one block of states, and for which measures alike. */
export type MeasureCalibration = CalibrationNote & { measureKeys: string[]; cropKey: string };
export type WeighedEstimates = SurveyEstimates & { calibrations: MeasureCalibration[] };

/**
 * Every estimate of one measure and crop by calibrated weights: what `estimateSurvey` gives by design weights. It takes the
 * answers one by one, since weights differ within a stratum and tallies add up what shares one.
 * @param counties with an answer or one that could not be used: their areas are told, if only that nobody answered.
 * @throws {RangeError} when a county lies in no area, or as `joinStrata`.
 */
export function estimateWeighed(
	input: WeighingInput & {
		measure: SurveyMeasure;
		cropKey: string;
		counties: Iterable<string>;
		areasOfCounty: AreasOfCounty;
		cutOffs?: SteadinessCutOffs;
	},
): WeighedEstimates {
	const { measure, cropKey, cutOffs } = input;
	const weighed = weighAnswers(input);
	const key = { measureKey: measure.key, cropKey };
	const estimates = [...placesByArea(weighed, input)].map(([areaKey, inside]): AreaEstimate => {
		const estimate =
			measure.kind === "day"
				? dayOf(dayParts(weighed, inside), cutOffs)
				: inUnitOf(
						measure,
						cellOf({ kind: measure.kind, range: rangeOf(measure) }, cellParts(measure.kind, weighed, inside), cutOffs),
					);
		return { ...estimate, ...key, areaKey };
	});
	return {
		estimates,
		joins: weighed.strata.joins.map((join) => ({ ...join, ...key })),
		calibrations: weighed.blocks
			.filter(({ members }) => members.length > 0)
			.map(({ note }) => ({ ...note, measureKeys: [measure.key], cropKey })),
	};
}

/** Which answers lie in each area that has any, or whose growers were asked. */
function placesByArea(
	{ answers }: Pick<WeighedAnswers, "answers">,
	{ counties, areasOfCounty }: { counties: Iterable<string>; areasOfCounty: AreasOfCounty },
): Map<string, number[]> {
	const areasOf = (countyFips: string) => {
		const areas = areasOfCounty.get(countyFips);
		if (!areas) throw new RangeError(`county ${countyFips} lies in no area`);
		return areas;
	};
	const byArea = new Map<string, number[]>();
	for (const county of counties) for (const areaKey of areasOf(county)) byArea.set(areaKey, []);
	for (const [i, { countyFips }] of answers.entries()) {
		for (const areaKey of areasOf(countyFips)) {
			const inside = byArea.get(areaKey);
			if (inside) inside.push(i);
			else byArea.set(areaKey, [i]);
		}
	}
	return byArea;
}

/** Says once what holds for several measures alike, since most have the same growers' answers. */
export function gatherCalibrations(all: readonly MeasureCalibration[]): MeasureCalibration[] {
	const gathered = new Map<string, MeasureCalibration>();
	for (const { measureKeys, ...same } of all) {
		const key = JSON.stringify(same);
		const before = gathered.get(key)?.measureKeys ?? [];
		gathered.set(key, { ...same, measureKeys: [...before, ...measureKeys] });
	}
	return [...gathered.values()];
}
