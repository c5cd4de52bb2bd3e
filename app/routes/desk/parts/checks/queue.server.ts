import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { shownAs, type ShownAnswer } from "#app/collect/answer-lines.ts";
import type { Answer, FormDefinition, Measure, Question } from "#app/collect/form.ts";
import { findSurveyForm } from "#app/collect/forms.server.ts";
import type { PlantingAsked } from "#app/collect/steps.ts";
import { findSurvey } from "#app/collect/surveys.server.ts";
import { listAreas } from "#app/directory/areas.server.ts";
import type { Words } from "#app/lib/words.ts";
import { listBatch } from "#app/review/decisions.server.ts";
import type { FindingsQuery } from "#app/review/findings.schema.ts";
import { keyOf } from "#app/review/reviewed-answers.ts";
import { countOpenFindings, type Finding, listFindings } from "#app/review/findings.server.ts";

/** One odd answer as a row tells it. */
export type AboutShown = {
	at: string;
	label: Words;
	shown: ShownAnswer;
	planting: Pick<PlantingAsked, "cropKey" | "cultivar"> | null;
};
/** The measure whose figure moves, for its words and unit. */
export type MovedMeasure = Pick<Measure, "key" | "label" | "unit" | "decimals">;

/** A page of a survey's queue with what its filters offer. @returns undefined for a survey of no state of the viewer's. */
export async function readQueue(trx: Trx, viewer: Associate, surveyId: string, query: FindingsQuery) {
	const survey = await findSurvey(trx, viewer, surveyId);
	const definition = survey && (await findSurveyForm(trx, surveyId));
	if (!definition) return undefined;
	const found = await listFindings(trx, viewer, surveyId, query);
	const plantings = await plantingsById(trx, found.rows);
	const held = survey.stateFips.filter((state) => viewer.stateFips.includes(state));
	const areas = await listAreas(trx, held);
	return {
		...found,
		rows: found.rows.map((row) => queueRow(definition, row, plantings)),
		query,
		crops: survey.cropKeys,
		areas: areas.map(({ key, kind, name, stateFips }) => ({ key, kind, name, stateFips })),
		open: (await countOpenFindings(trx, viewer)).get(surveyId) ?? 0,
		isDraft: survey.state === "draft",
		season: survey.season,
		undoable: query.batch === null ? 0 : (await listBatch(trx, viewer, query.batch)).length,
	};
}

function queueRow(definition: FormDefinition, finding: Finding, plantings: Map<string, PlantingAsked>) {
	const { about, moved } = finding;
	const measure = moved && definition.measures.find(({ key }) => key === moved.measureKey);
	return {
		...finding,
		shown: about.flatMap((answer) => showAnswer(definition, answer, plantings) ?? []),
		measure: measure ? measureWords(measure) : null,
		unit: unitOfTold(definition, finding),
	};
}
export type QueueRow = ReturnType<typeof queueRow>;

export function measureWords({ key, label, unit, decimals }: Measure): MovedMeasure {
	return { key, label, unit, decimals };
}

export function findQuestion({ screens }: FormDefinition, questionKey: string): Question | undefined {
	return screens.flatMap(({ questions }) => questions).find(({ key }) => key === questionKey);
}

export function showAnswer(
	definition: FormDefinition,
	answer: Answer,
	plantings: ReadonlyMap<string, PlantingAsked>,
): AboutShown | undefined {
	const question = findQuestion(definition, answer.questionKey);
	const planting = plantings.get(answer.plantingId ?? "") ?? null;
	if (!question) return undefined;
	return {
		at: keyOf(answer),
		label: question.label ?? question.text,
		shown: shownAs(question, answer, planting),
		planting: planting && { cropKey: planting.cropKey, cultivar: planting.cultivar },
	};
}

/** What a finding's own numbers are counted in: the kept unit of its question. */
export function unitOfTold(definition: FormDefinition, { questionKey }: Pick<Finding, "questionKey">) {
	const question = findQuestion(definition, questionKey);
	if (question?.type === "percent") return "percent" as const;
	return question?.type === "number" ? question.unitFamily : null;
}
export type ToldUnit = ReturnType<typeof unitOfTold>;

/** The plantings that findings speak of, also those taken out since. */
export async function plantingsById(
	trx: Trx,
	findings: readonly Pick<Finding, "about">[],
): Promise<Map<string, PlantingAsked>> {
	const ids = findings.flatMap(({ about }) => about.flatMap(({ plantingId }) => plantingId ?? []));
	const rows = await trx
		.selectFrom("directory.planting as p")
		.innerJoin("directory.crop as c", "c.crop_key", "p.crop_key")
		.where((eb) => eb("p.planting_id", "=", eb.fn.any(eb.val(ids))))
		.select(["p.planting_id", "p.crop_key", "p.cultivar", "p.bearing_trees", "c.plant_kind", "c.bushel_lb"])
		.execute();
	return new Map(
		rows.map((row) => [
			row.planting_id,
			{
				plantingId: row.planting_id,
				cropKey: row.crop_key,
				cultivar: row.cultivar,
				bearingTrees: row.bearing_trees,
				plantKind: row.plant_kind === "bush" ? "bush" : "tree",
				bushelLb: row.bushel_lb,
			},
		]),
	);
}
