import type { Trx } from "#app/auth/scope.server.ts";
import type { FormDefinition } from "#app/collect/form.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import { groupBy } from "#app/lib/group-by.ts";
import type { Odd } from "#app/review/odd-answers.ts";
import { neighborsOf, oddnessOf, quantitiesOf } from "#app/review/odd-quantities.ts";
import { findLastSurvey, listToldQuantities } from "#app/review/told-quantities.server.ts";
import { listFrameStrata, listTallies } from "#app/tally/tally.server.ts";

/** A response that was sent in and counts, with its place in the frame. */
export type Answered = {
	responseId: string;
	surveyId: string;
	operationId: string;
	stateFips: string;
	stratumKey: string;
};

export function listAnswered(trx: Trx, surveyId: string): Promise<Answered[]> {
	return selectAnswered(trx).where("r.survey_id", "=", surveyId).where("r.submitted_at", "is not", null).execute();
}

/** Also one that was taken back since: what was odd about it no longer is. */
export function findAnswered(trx: Trx, responseId: string): Promise<Answered[]> {
	return selectAnswered(trx).where("r.response_id", "=", responseId).execute();
}

function selectAnswered(trx: Trx) {
	return trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.frame_operation as f", (join) =>
			join.onRef("f.survey_id", "=", "r.survey_id").onRef("f.operation_id", "=", "r.operation_id"),
		)
		.orderBy("r.response_id")
		.select(["r.response_id as responseId", "r.survey_id as surveyId", "r.operation_id as operationId"])
		.select(["f.state_fips as stateFips", "f.stratum_key as stratumKey"]);
}

/** What every response of a survey is checked with, read once. */
export async function prepareChecking(trx: Trx, surveyId: string, definition: FormDefinition, answered: Answered[]) {
	const quantities = quantitiesOf(definition);
	const { crop_keys: cropKeys } = await trx
		.selectFrom("collect.survey")
		.select("crop_keys")
		.where("survey_id", "=", surveyId)
		.executeTakeFirstOrThrow();
	const told = await listToldQuantities(
		trx,
		{ surveyId, lastSurveyId: await findLastSurvey(trx, surveyId) },
		quantities.map(({ measure }) => measure.key),
		{ stateFips: [...new Set(answered.map(({ stateFips }) => stateFips))], cropKeys },
	);
	const groups = groupBy(told, ({ measureKey, cropKey, stateFips }) => `${measureKey} ${cropKey} ${stateFips}`);
	const neighbors = new Map([...groups].map(([key, rows]) => [key, neighborsOf(rows)]));
	const byOperation = groupBy(told, ({ operationId }) => operationId);
	const questionOf = new Map(
		quantities.map(({ measure, question }) => [measure.key, { question, unit: measure.unit }]),
	);

	/** What one operation's quantities are odd beside; told of every planting of the crop, as they were summed. */
	function oddQuantities({ operationId }: Answered, plantings: PlantingAsked[]): Odd[] {
		return (byOperation.get(operationId) ?? []).flatMap((one) => {
			const { measureKey, cropKey, stateFips } = one;
			const { question, unit } = questionOf.get(measureKey)!;
			const ofCrop = plantings.filter((planting) => planting.cropKey === cropKey);
			const bushelLb = unit === "lb" ? (ofCrop[0]?.bushelLb ?? null) : null;
			const around = neighbors.get(`${measureKey} ${cropKey} ${stateFips}`)!;
			const perPlanting = definition.screens.some(
				(screen) => screen.perPlanting && screen.questions.some(({ key }) => key === question),
			);
			const about = perPlanting
				? ofCrop.map(({ plantingId }) => ({ questionKey: question, plantingId }))
				: [{ questionKey: question, plantingId: null }];
			return oddnessOf(one, around, bushelLb).map(({ checkKind, told: why }) => ({
				checkKind,
				checkKey: `${checkKind}.${measureKey}.${cropKey}`,
				questionKey: question,
				plantingId: about.length === 1 ? about[0]!.plantingId : null,
				cropKey,
				about,
				told: why,
			}));
		});
	}
	return {
		surveyId,
		definition,
		oddQuantities,
		frame: await listFrameStrata(trx, surveyId),
		tallies: groupBy(await listTallies(trx, surveyId), ({ measureKey, cropKey }) => `${measureKey} ${cropKey}`),
	};
}
export type Checking = Awaited<ReturnType<typeof prepareChecking>>;
