import type { Trx } from "#app/auth/scope.server.ts";
import type { WeighingInput } from "#app/estimate/calibration/blocks.ts";
import {
	estimateWeighed,
	gatherCalibrations,
	type WeighedEstimates,
} from "#app/estimate/calibration/weighed-survey.ts";
import type { Weighting } from "#app/estimate/calibration/weighting.ts";
import type { SteadinessCutOffs } from "#app/estimate/steadiness.ts";
import { type AreasOfCounty, estimateSurvey, type SurveyMeasure, type SurveyTally } from "#app/estimate/survey.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { FrameStratum, ToldAnswer } from "#app/tally/tally.ts";
import { listFrameCells, listToldAnswers } from "#app/tally/told-answers.server.ts";

export type WeighedInputs = {
	surveyId: string;
	weighting: Weighting;
	frame: readonly (FrameStratum & { cropKey: string })[];
	/** Their measures and crops are what is estimated. */
	tallies: readonly SurveyTally[];
	areasOfCounty: AreasOfCounty;
	districtOf: ReadonlyMap<string, string | null>;
};

/**
 * The estimates of a survey by the weights that were chosen for it. By design weights the kept tallies are all that is needed;
 * others read the answers, a measure at a time. The scope decides whose answers there are.
 */
export async function estimateByWeights(
	trx: Trx,
	inputs: WeighedInputs & { measures: readonly SurveyMeasure[]; cutOffs?: SteadinessCutOffs },
): Promise<WeighedEstimates> {
	if (inputs.weighting === "design") return { ...estimateSurvey(inputs), calibrations: [] };
	const made: WeighedEstimates = { estimates: [], joins: [], calibrations: [] };
	const cellsOf = groupBy(await listFrameCells(trx, inputs.surveyId), ({ cropKey }) => cropKey);
	const talliesOf = groupBy(inputs.tallies, ({ measureKey }) => measureKey);
	for (const measure of inputs.measures) {
		const byCrop = groupBy(talliesOf.get(measure.key) ?? [], ({ cropKey }) => cropKey);
		if (byCrop.size === 0) continue;
		const { surveyId } = inputs;
		const answers = await listToldAnswers(trx, { surveyId, measureKey: measure.key, cropKeys: [...byCrop.keys()] });
		const answersOf = groupBy(answers, ({ cropKey }) => cropKey);
		for (const [cropKey, tallies] of byCrop) {
			const { estimates, joins, calibrations } = estimateWeighed({
				...weighingOf(inputs, cropKey, cellsOf.get(cropKey) ?? [], answersOf.get(cropKey) ?? []),
				measure,
				cropKey,
				counties: new Set(tallies.map(({ countyFips }) => countyFips)),
				areasOfCounty: inputs.areasOfCounty,
				cutOffs: inputs.cutOffs,
			});
			made.estimates.push(...estimates);
			made.joins.push(...joins);
			made.calibrations.push(...calibrations);
		}
	}
	return { ...made, calibrations: gatherCalibrations(made.calibrations) };
}

/** What the weights of one measure's answers about one crop rest on, read anew. */
export async function readWeighing(
	trx: Trx,
	inputs: WeighedInputs,
	{ measureKey, cropKey }: { measureKey: string; cropKey: string },
): Promise<WeighingInput> {
	const { surveyId } = inputs;
	const cells = (await listFrameCells(trx, surveyId)).filter((cell) => cell.cropKey === cropKey);
	const answers = await listToldAnswers(trx, { surveyId, measureKey, cropKeys: [cropKey] });
	return weighingOf(inputs, cropKey, cells, answers);
}

function weighingOf(
	{ weighting, frame, districtOf }: WeighedInputs,
	cropKey: string,
	cells: WeighingInput["cells"],
	answers: readonly ToldAnswer[],
): WeighingInput {
	return { weighting, frame: frame.filter((stratum) => stratum.cropKey === cropKey), cells, answers, districtOf };
}
