import { type Estimate, estimateCell, type EstimatedMeasure, type EstimateKind } from "#app/estimate/cell.ts";
import type { SteadinessCutOffs } from "#app/estimate/steadiness.ts";
import { joinStrata, respondentsByStratum, type Join, type StrataFrame } from "#app/estimate/strata.ts";
import { type DayEstimate, estimateDays } from "#app/estimate/days.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { DayCount, FrameStratum, Tally } from "#app/tally/tally.ts";

/** What of a measure the estimators need; a form's measures have more. */
export type SurveyMeasure = { key: string; kind: EstimateKind | "day"; scale: number; unit: string };
/** A tally row; of a measure of days with its histogram. */
export type SurveyTally = Tally & { days?: readonly DayCount[] | null };

/** Where a county lies: the keys of every area that holds it, itself first. */
export type AreasOfCounty = ReadonlyMap<string, readonly string[]>;

export type AreaEstimate = DayEstimate & { measureKey: string; cropKey: string; areaKey: string };
export type SurveyEstimates = { estimates: AreaEstimate[]; joins: (Join & { measureKey: string; cropKey: string })[] };

/**
 * Every estimate of one survey: each measure, crop and area that has a tally row. Values are scaled to the measure's
 * unit (a share told in percent is 0 to 100), and so are standard errors and interval ends; cv stays a fraction.
 * A measure of days gives its median with the quartiles.
 * Strata are joined once for each measure and crop over all tallies given, so that areas add up.
 * @param frame the strata of every crop, `all` among them, of the same states as the tallies.
 * @throws {RangeError} when a tally lies in a county that no area holds, or in a stratum outside the frame.
 */
export function estimateSurvey(input: {
	measures: readonly SurveyMeasure[];
	frame: readonly (FrameStratum & { cropKey: string })[];
	tallies: readonly SurveyTally[];
	areasOfCounty: AreasOfCounty;
	cutOffs?: SteadinessCutOffs;
}): SurveyEstimates {
	const result: SurveyEstimates = { estimates: [], joins: [] };
	const byMeasure = groupBy(input.tallies, (tally) => tally.measureKey);
	const frameOfCrop = groupBy(input.frame, (stratum) => stratum.cropKey);
	for (const measure of input.measures) {
		const byCrop = groupBy(byMeasure.get(measure.key) ?? [], (tally) => tally.cropKey);
		for (const [cropKey, tallies] of byCrop) {
			const strata = joinStrata(frameOfCrop.get(cropKey) ?? [], respondentsByStratum(tallies));
			result.joins.push(...strata.joins.map((join) => ({ ...join, measureKey: measure.key, cropKey })));
			for (const [areaKey, rows] of groupByArea(tallies, input.areasOfCounty)) {
				const estimate = estimateArea(measure, strata, rows, input.cutOffs);
				result.estimates.push({ ...estimate, measureKey: measure.key, cropKey, areaKey });
			}
		}
	}
	return result;
}

function groupByArea(tallies: readonly SurveyTally[], areasOfCounty: AreasOfCounty): Map<string, SurveyTally[]> {
	const byArea = new Map<string, SurveyTally[]>();
	for (const tally of tallies) {
		const areas = areasOfCounty.get(tally.countyFips);
		if (!areas) throw new RangeError(`county ${tally.countyFips} lies in no area`);
		for (const areaKey of areas) {
			const rows = byArea.get(areaKey);
			if (rows) rows.push(tally);
			else byArea.set(areaKey, [tally]);
		}
	}
	return byArea;
}

function estimateArea(
	measure: SurveyMeasure,
	strata: StrataFrame,
	rows: SurveyTally[],
	cutOffs?: SteadinessCutOffs,
): DayEstimate {
	if (measure.kind === "day") {
		const days = rows.map((row) => ({ stratumKey: row.stratumKey, days: row.days ?? null }));
		return estimateDays(strata, days, cutOffs);
	}
	return inUnitOf(measure, estimateCell({ kind: measure.kind, range: rangeOf(measure) }, strata, rows, cutOffs));
}

/** A share of a whole cannot leave 0 to 1. A loss can be below 0 (a crop above normal), so only a proportion is cut. */
export function rangeOf({ kind, unit }: Pick<SurveyMeasure, "kind" | "unit">): EstimatedMeasure["range"] {
	if (kind === "proportion") return { lowest: 0, highest: 1 };
	return unit === "percent" ? { highest: 1 } : { lowest: 0 };
}

/** An estimate in the unit that the measure is told in. */
export function inUnitOf({ scale }: Pick<SurveyMeasure, "scale">, estimate: Estimate): Estimate {
	const scaled = (value: number | null) => (value === null ? null : value * scale);
	return {
		...estimate,
		value: scaled(estimate.value),
		standardError: scaled(estimate.standardError),
		lower: scaled(estimate.lower),
		upper: scaled(estimate.upper),
	};
}
