import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findNewestSubmission, type Submission } from "#app/collect/answer-rows.server.ts";
import type { Answer, FormDefinition } from "#app/collect/form.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import { isId } from "#app/collect/surveys.server.ts";
import { quantileOf } from "#app/lib/order-statistics.ts";
import { listCorrectionHistory, listCorrections } from "#app/review/corrections.server.ts";
import { type Finding, findFinding, listSteps } from "#app/review/findings.server.ts";
import { quantitiesOf, sizeOf, type ToldQuantity } from "#app/review/odd-quantities.ts";
import { type Correction, keyOf, placeOf, reviewAnswers } from "#app/review/reviewed-answers.ts";
import { findLastSurvey, listToldQuantities } from "#app/review/told-quantities.server.ts";
import { readDraftInputs } from "../estimates/draft-estimates.server.ts";
import { listMovedEstimates } from "./moved-estimates.server.ts";
import { findQuestion, measureWords, plantingsById, showAnswer, unitOfTold } from "./queue.server.ts";

type Place = { surveyId: string; findingId: string };

/**
 * One finding with all that helps to decide it: the grower's answer beside what counts now, last season's and like
 * operations', what was done so far, and what the figures are with and without it.
 * @param proposed what a correction would put in the place of one of the answers.
 */
export async function viewFinding(
	trx: Trx,
	viewer: Associate,
	{ surveyId, findingId }: Place,
	proposed: Correction | null = null,
) {
	const finding = isId(findingId) ? await readFinding(trx, viewer, surveyId, findingId) : undefined;
	if (!finding) return undefined;
	const { definition, submission, inputs, corrections, ...found } = finding;
	const plantings = await plantingsById(trx, [found.finding]);
	const { answers, setAside } = reviewAnswers(definition, submission.answers, corrections);
	const last = await findLastAnswers(trx, surveyId, found.finding);
	const measure = definition.measures.find(({ key }) => key === found.finding.moved?.measureKey);
	return {
		finding: found.finding,
		season: inputs.survey.season,
		measure: measure ? measureWords(measure) : null,
		unit: unitOfTold(definition, found.finding),
		answers: found.finding.about.map((about) => {
			const at = keyOf(about);
			const own = submission.answers.find((one) => keyOf(one) === at);
			const now = answers.find((one) => keyOf(one) === at);
			const before = last.find((one) => keyOf(one) === at);
			const question = findQuestion(definition, about.questionKey);
			return {
				place: placeOf(about),
				planting: plantings.get(about.plantingId ?? "") ?? null,
				question: question ?? null,
				/** The grower's own answer, as a decision names it. */
				told: own ? { kind: own.kind, value: own.value } : null,
				/** As it stood when the check found it odd. */
				asFound: showAnswer(definition, about, plantings),
				own: own && showAnswer(definition, own, plantings),
				now: now && showAnswer(definition, now, plantings),
				last: before && showAnswer(definition, before, plantings),
				isSetAside: setAside.some((one) => keyOf(one) === at),
				seen: corrections.find((one) => keyOf(one) === at)?.number ?? 0,
			};
		}),
		like: await likeOperations(trx, surveyId, definition, found.finding),
		steps: await listSteps(trx, findingId),
		history: (await listCorrectionHistory(trx, found.finding.responseId)).flatMap((one) => {
			const shown = showAnswer(definition, { ...placeOf(one), ...one.was, given: null }, plantings);
			const put = one.answer && "kind" in one.answer ? { ...placeOf(one), ...one.answer } : null;
			const isHere = found.finding.about.some((about) => keyOf(about) === keyOf(one));
			return isHere && shown ? [{ ...one, shown, put: put && showAnswer(definition, put, plantings) }] : [];
		}),
		moved: await movedBy(trx, { ...finding, proposed }),
	};
}
export type FindingView = NonNullable<Awaited<ReturnType<typeof viewFinding>>>;

async function readFinding(trx: Trx, viewer: Associate, surveyId: string, findingId: string) {
	const inputs = await readDraftInputs(trx, viewer, surveyId);
	const finding = inputs && (await findFinding(trx, viewer, surveyId, findingId));
	const submission = finding && (await findNewestSubmission(trx, finding.responseId, "counted"));
	const definition = submission && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	return { inputs, finding, submission, definition, corrections: await listCorrections(trx, finding.responseId) };
}

type Read = NonNullable<Awaited<ReturnType<typeof readFinding>>>;

/**
 * Open: as it counts now, and without the answer, or as proposed. Ended by a decision about the answer: as the grower had
 * told it, and as it counts now.
 */
async function movedBy(trx: Trx, { finding, corrections, proposed, ...read }: Read & { proposed: Correction | null }) {
	const { outcome, about, cropKey } = finding;
	const isHere = (one: Correction) => about.some((place) => keyOf(place) === keyOf(one));
	const others = corrections.filter((one) => !isHere(one));
	const decided = outcome === "corrected" || outcome === "set_aside";
	const without = about.flatMap((place): Correction[] => {
		const own = read.submission.answers.find((one) => keyOf(one) === keyOf(place));
		return own ? [{ ...placeOf(place), act: "set_aside", was: own, answer: null }] : [];
	});
	const withProposed = proposed
		? [...corrections.filter((one) => keyOf(one) !== keyOf(proposed)), proposed]
		: [...others, ...without.slice(0, 1)];
	const crop = cropKey ?? (read.inputs.survey.cropKeys.length > 1 ? "all" : read.inputs.survey.cropKeys[0]!);
	const variants = decided ? [others, corrections] : [corrections, withProposed];
	return {
		from: decided ? ("as_told" as const) : ("now" as const),
		to: decided ? ("now" as const) : proposed ? ("proposed" as const) : ("without" as const),
		cropKey: crop,
		rows: await listMovedEstimates(trx, { ...read, finding, cropKey: crop, variants }),
	};
}

/** What the operation told last season at the same places. */
async function findLastAnswers(trx: Trx, surveyId: string, { operationId }: Finding): Promise<Answer[]> {
	const lastSurveyId = await findLastSurvey(trx, surveyId);
	if (!lastSurveyId) return [];
	const last = await trx
		.selectFrom("collect.response")
		.select("response_id")
		.where("survey_id", "=", lastSurveyId)
		.where("operation_id", "=", operationId)
		.where("submitted_at", "is not", null)
		.executeTakeFirst();
	const submission: Submission | undefined = last && (await findNewestSubmission(trx, last.response_id, "counted"));
	return submission?.answers ?? [];
}

/** How operations with the crop in the same district, or where those are few the state, told the same quantity. */
async function likeOperations(trx: Trx, surveyId: string, definition: FormDefinition, finding: Finding) {
	const quantity = quantitiesOf(definition).find(({ question }) =>
		finding.about.some(({ questionKey }) => questionKey === question),
	);
	if (!quantity || finding.cropKey === null) return null;
	const told = await listToldQuantities(
		trx,
		{ surveyId, lastSurveyId: await findLastSurvey(trx, surveyId) },
		[quantity.measure.key],
		{ stateFips: [finding.stateFips], cropKeys: [finding.cropKey] },
	);
	const own = told.find(({ operationId }) => operationId === finding.operationId);
	const others = told.filter(({ operationId }) => operationId !== finding.operationId);
	const ofDistrict = others.filter(({ districtKey }) => districtKey !== null && districtKey === finding.districtKey);
	const among = ofDistrict.length >= 3 ? ofDistrict : others;
	const sizes = sizesOf(among);
	if (sizes.length < 3) return null;
	const perPlant = quantity.measure.key !== "base.bearing_trees" && among.every(({ plants }) => plants !== null);
	return {
		area: among === ofDistrict ? ("district" as const) : ("state" as const),
		perPlant,
		count: sizes.length,
		quartiles: [0.25, 0.5, 0.75].map((p) => quantileOf(sizes, p)) as [number, number, number],
		own: own ? sizeOf(own) : null,
		unit: quantity.measure.unit,
		label: findQuestion(definition, quantity.question)?.label ?? quantity.measure.label,
	};
}

function sizesOf(told: readonly ToldQuantity[]): number[] {
	return told.map(sizeOf).filter((size) => size !== null);
}
