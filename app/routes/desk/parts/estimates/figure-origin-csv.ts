import { toCsv } from "#app/publish/data-file.ts";
import type { ToldFigure } from "./figure-origin.server.ts";

type Line = [part: string, of: string, item: string, value: string | number | null];

/**
 * Every number behind one draft figure, one a line: which part of the making it belongs to, of what, its name and its value
 * unrounded. An absent number is an empty field.
 */
export function figureOriginCsv(told: ToldFigure): string {
	const { survey, area, cropKey, measure, origin, units } = told;
	const { estimate, items, totals } = origin;
	return toCsv(
		["part", "of", "item", "value"],
		[
			...lines("figure", "", {
				note: "not for publication",
				survey: survey.title.en,
				season: survey.season,
				weighting: told.weighting,
				measure: measure.key,
				kind: measure.kind,
				unit: measure.unit,
				crop: cropKey,
				area: area.key,
				value: estimate?.value ?? null,
				standard_error: estimate?.standardError ?? null,
				cv: estimate?.cv ?? null,
				lower: estimate?.lower ?? null,
				upper: estimate?.upper ?? null,
				first_quartile: estimate?.quartiles?.first ?? null,
				third_quartile: estimate?.quartiles?.third ?? null,
				respondents: estimate?.respondents ?? 0,
				steadiness: estimate?.steadiness ?? null,
				missing: estimate ? estimate.missing : "no_respondents",
				weighted_count: totals.count,
				weighted_sum_y: totals.y,
				unit_y: units.y,
				weighted_sum_x: totals.x,
				unit_x: units.x,
			}),
			...lines("answers", "", {
				used: items.used,
				set_aside: items.setAside,
				unanswered: items.unanswered,
				item_response_rate: items.rate,
			}),
			...responseLines(told),
			...strataLines(told),
			...calibrationLines(told),
		],
	);
}

function responseLines({ dispositions, response }: ToldFigure): Line[] {
	return [
		...dispositions.flatMap(({ disposition, operations, bearingTrees }) =>
			lines("disposition", disposition, { operations, bearing_trees: bearingTrees }),
		),
		...lines("response_rate", "operations", response.counted),
		...lines("response_rate", "bearing_trees", response.weighted),
	];
}

function strataLines({ origin: { strata, joins } }: ToldFigure): Line[] {
	return [
		...strata.flatMap((stratum) =>
			lines("stratum", stratum.stratumKeys.join("+"), {
				frame_size: stratum.frameSize,
				respondents: stratum.respondents,
				weight: stratum.weight,
				...(stratum.calibrated && {
					smallest_calibrated_weight: stratum.calibrated.smallest,
					largest_calibrated_weight: stratum.calibrated.largest,
				}),
				respondents_in_area: stratum.inArea,
				sum_y: stratum.sumY,
				sum_x: stratum.sumX,
				variance_share: stratum.varianceShare,
			}),
		),
		...joins.flatMap(({ stratumKeys, step }) => lines("joined", stratumKeys.join("+"), { step })),
	];
}

function calibrationLines({ origin }: ToldFigure): Line[] {
	return origin.calibrations.flatMap((one) => {
		const of = one.stateFips.join("+");
		return [
			...lines("calibration", of, {
				respondents: one.respondents,
				sweeps: one.sweeps,
				smallest_factor: one.smallest,
				largest_factor: one.largest,
				design_weights_kept_for: one.fallback,
				districts_taken_together: one.takenTogether.join("+"),
			}),
			...one.totals.flatMap((known) =>
				lines("known_total", `${of} ${known.of} ${known.group}`, { frame: known.total, by_design: known.byDesign }),
			),
		];
	});
}

function lines(part: string, of: string, items: Record<string, string | number | null>): Line[] {
	return Object.entries(items).map(([item, value]): Line => [part, of, item, value]);
}
