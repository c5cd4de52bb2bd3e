import type { Trx } from "#app/auth/scope.server.ts";
import type { Submission } from "#app/collect/answer-rows.server.ts";
import type { FormDefinition, Measure } from "#app/collect/form.ts";
import { estimateWeighed } from "#app/estimate/calibration/weighed-survey.ts";
import { estimateSurvey } from "#app/estimate/survey.ts";
import { readWeighing } from "#app/jobs/weighed-estimates.server.ts";
import { questionsOfMeasure } from "#app/lib/measure-questions.ts";
import type { Finding } from "#app/review/findings.server.ts";
import type { Correction } from "#app/review/reviewed-answers.ts";
import { reviewedRows } from "#app/tally/facts.server.ts";
import { type KeptTally, tallyOf } from "#app/tally/tally.ts";
import { findFrameTrees } from "#app/tally/told-answers.server.ts";
import { type DraftInputs, measuresOf } from "../estimates/draft-estimates.server.ts";
import { measureWords } from "./queue.server.ts";

type Told = { operationId: string; measureKey: string; y: number | null; x: number | null; setAside: boolean };
type Input = {
	inputs: DraftInputs;
	definition: FormDefinition;
	finding: Finding;
	submission: Submission;
	/** Which crop's figures to show. */
	cropKey: string;
	/** The figures are made once with each of these lists of decisions. */
	variants: readonly (readonly Correction[])[];
};

/**
 * The figures of the grower's county, district and state that an answer is in, once for each way of reviewing it. Made of the
 * tallies as they are kept, with the one county and stratum that holds the grower tallied anew each time.
 */
export async function listMovedEstimates(
	trx: Trx,
	{ inputs, definition, finding, submission, cropKey, variants }: Input,
) {
	const { countyFips } = finding;
	const questions = new Set(finding.about.map(({ questionKey }) => questionKey));
	const measures = measuresOf(inputs, cropKey).filter((measure) =>
		questionsOfMeasure(measure).some((key) => questions.has(key)),
	);
	const path = inputs.areasOfCounty.get(countyFips) ?? [];
	const made = await estimateVariants(trx, { inputs, definition, finding, submission, cropKey, variants }, measures);
	return measures.flatMap((measure) =>
		inputs.areas
			// The states that the desk holds, together, are no area that anybody reads of.
			.filter(({ key, kind }) => path.includes(key) && kind !== "region")
			.map(({ key, kind, name, stateFips }) => ({
				area: { key, kind, name, stateFips },
				measure: { ...measureWords(measure), season: inputs.survey.season },
				values: made.map((estimates) => estimates.get(`${measure.key} ${key}`) ?? null),
			})),
	);
}
export type MovedEstimate = Awaited<ReturnType<typeof listMovedEstimates>>[number];

/** The figures of the grower's areas, once for each way of reviewing the answer. */
async function estimateVariants(
	trx: Trx,
	{ inputs, definition, finding, submission, cropKey, variants }: Input,
	measures: Measure[],
): Promise<Map<string, number | null>[]> {
	const { operationId } = finding;
	const own = variants.map((corrections) => {
		const rows = reviewedRows(definition, submission, corrections).filter((row) => row.crop_key === cropKey);
		return rows.map(({ measure_key: measureKey, y, x, set_aside: setAside }) => ({
			operationId,
			measureKey,
			y,
			x,
			setAside,
		}));
	});
	if (inputs.weighting !== "design") return weighedVariants(trx, inputs, finding, { cropKey, measures, own });
	const place = { countyFips: finding.countyFips, stratumKey: finding.stratumKey };
	const cell = await listCell(trx, finding, inputs.survey.surveyId, cropKey, measures);
	const others = cell.filter((row) => row.operationId !== operationId);
	return own.map((rows) => estimatesWith(inputs, measures, cropKey, place, [...others, ...rows]));
}

/** By calibrated weights: every answer about the crop is weighed anew with each way of reviewing this one. */
async function weighedVariants(
	trx: Trx,
	inputs: DraftInputs,
	{ countyFips, stratumKey, operationId }: Finding,
	{ cropKey, measures, own }: { cropKey: string; measures: Measure[]; own: Told[][] },
): Promise<Map<string, number | null>[]> {
	const made = own.map(() => new Map<string, number | null>());
	const bearingTrees = await findFrameTrees(trx, { surveyId: inputs.surveyId, operationId, cropKey });
	for (const measure of measures) {
		const weighing = await readWeighing(trx, inputs, { measureKey: measure.key, cropKey });
		const others = weighing.answers.filter((answer) => answer.operationId !== operationId);
		for (const [at, rows] of own.entries()) {
			const told = rows.find((row) => row.measureKey === measure.key && !row.setAside);
			const { y, x } = told ?? { y: null, x: null };
			const answer = { operationId, countyFips, stratumKey, bearingTrees };
			const answers = y === null || x === null ? others : [...others, { ...answer, y, x }];
			const { areasOfCounty } = inputs;
			const counties = [countyFips];
			const { estimates } = estimateWeighed({ ...weighing, answers, measure, cropKey, counties, areasOfCounty });
			for (const { areaKey, value } of estimates) made[at]!.set(`${measure.key} ${areaKey}`, value);
		}
	}
	return made;
}

function estimatesWith(
	{ tallies, frame, areasOfCounty }: DraftInputs,
	measures: Measure[],
	cropKey: string,
	place: { countyFips: string; stratumKey: string },
	cell: readonly Told[],
): Map<string, number | null> {
	const isHere = (tally: KeptTally) => tally.countyFips === place.countyFips && tally.stratumKey === place.stratumKey;
	const keys = new Set(measures.map(({ key }) => key));
	const kept = tallies.filter((tally) => tally.cropKey === cropKey && keys.has(tally.measureKey));
	const stateFips = frame.find((stratum) => stratum.stratumKey === place.stratumKey)?.stateFips ?? "";
	const anew = measures.map(({ key: measureKey, kind }) => {
		const told = cell.flatMap((row) =>
			row.measureKey === measureKey && !row.setAside && row.y !== null && row.x !== null
				? [{ y: row.y, x: row.x }]
				: [],
		);
		const days = kind === "day" ? told.map(({ y }) => ({ value: y, n: 1 })) : null;
		const shared = { measureKey, cropKey, ...place, stateFips, setAside: 0, days };
		return { ...tallyOf(told), ...shared };
	});
	const others = kept.filter((tally) => !isHere(tally));
	const { estimates } = estimateSurvey({ measures, frame, tallies: [...others, ...anew], areasOfCounty });
	return new Map(estimates.map(({ measureKey, areaKey, value }) => [`${measureKey} ${areaKey}`, value]));
}

async function listCell(
	trx: Trx,
	{ countyFips, stratumKey }: Finding,
	surveyId: string,
	cropKey: string,
	measures: Measure[],
): Promise<Told[]> {
	const keys = measures.map(({ key }) => key);
	return trx
		.selectFrom("collect.fact")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", cropKey)
		.where("county_fips", "=", countyFips)
		.where("stratum_key", "=", stratumKey)
		.where((eb) => eb("measure_key", "=", eb.fn.any(eb.val(keys))))
		.select(["operation_id as operationId", "measure_key as measureKey", "y", "x", "set_aside as setAside"])
		.execute();
}
