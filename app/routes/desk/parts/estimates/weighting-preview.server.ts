import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { hasDraftedRelease } from "#app/collect/survey-opening.server.ts";
import { estimateByWeights } from "#app/jobs/weighed-estimates.server.ts";
import { pageOf } from "#app/lib/page-of.ts";
import { measuresOf, readDraftInputs } from "./draft-estimates.server.ts";
import type { WeightingQuery } from "./estimates.schema.ts";
import { compareWeights, sortReweighted } from "./reweighted-rows.ts";

/**
 * A survey's figures by design weights beside those by another choice, before it is made: how far each figure and its
 * standard error would move, and how the weights come about. Of the viewer's states.
 * @returns undefined for a survey that asks in none of them.
 */
export async function previewWeighting(trx: Trx, viewer: Associate, surveyId: string, asked: WeightingQuery) {
	const inputs = await readDraftInputs(trx, viewer, surveyId);
	if (!inputs) return undefined;
	const { survey } = inputs;
	const crops = [...(inputs.measures.some((measure) => measure.acrossCrops) ? ["all"] : []), ...survey.cropKeys];
	const tried = asked.try ?? (survey.weighting === "design" ? "raked" : survey.weighting);
	const query = { ...asked, try: tried, crop: crops.includes(asked.crop) ? asked.crop : (crops[0] ?? "all") };
	const measures = measuresOf(inputs, query.crop);
	const ofCrop = { ...inputs, measures, tallies: inputs.tallies.filter((tally) => tally.cropKey === query.crop) };
	const design = await estimateByWeights(trx, { ...ofCrop, weighting: "design" });
	const other = await estimateByWeights(trx, { ...ofCrop, weighting: tried });
	const areas = inputs.areas.filter((area) => query.level === "all" || area.kind === query.level);
	const rows = compareWeights(
		areas,
		measures.map(({ key }) => key),
		design.estimates,
		other.estimates,
	);
	return {
		query,
		crops,
		weighting: survey.weighting,
		mayManage: survey.mayManage,
		isDrafted: await hasDraftedRelease(trx, surveyId),
		statesNotHeld: survey.statesNotHeld,
		measures: measures.map(({ key, label, unit, decimals }) => ({ key, label, unit, decimals, season: survey.season })),
		districts: inputs.areas.flatMap(({ key, kind, name }) => (kind === "district" ? [{ key, name }] : [])),
		calibrations: other.calibrations,
		...pageOf(sortReweighted(rows, query), query.page),
	};
}
