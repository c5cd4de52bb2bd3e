import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { AnswerPlace } from "./answer-place.server.ts";
import { answerOf, answerColumns } from "./answer-rows.server.ts";
import type { FormDefinition } from "./form.ts";
import type { EarlierAnswer } from "./step-values.ts";
import type { PlantingAsked } from "./steps.ts";

/**
 * What the operation told in its newest earlier season of the questions that are filled in from there. Of trees that bear,
 * the list of plantings knows better where it was changed since.
 */
export async function listEarlierAnswers(
	trx: Trx,
	{ operationId }: AnswerPlace,
	{ season, definition, plantings }: { season: number; definition: FormDefinition; plantings: PlantingAsked[] },
): Promise<EarlierAnswer[]> {
	const asked = definition.screens.flatMap(({ questions }) => questions);
	const filled = asked.flatMap((question) =>
		question.type === "number" && question.prefill ? [{ key: question.key, prefill: question.prefill }] : [],
	);
	if (filled.length === 0) return [];
	const ofTrees = filled.filter(({ prefill }) => prefill === "bearing_trees").map(({ key }) => key);
	const keys = filled.map(({ key }) => key);
	const rows = await trx
		.selectFrom("collect.answer as a")
		.innerJoin("collect.response as r", "r.response_id", "a.response_id")
		.innerJoin("collect.survey as s", "s.survey_id", "r.survey_id")
		.leftJoin("directory.planting as p", "p.planting_id", "a.planting_id")
		.where("r.operation_id", "=", operationId)
		.where("r.submitted_at", "is not", null)
		.where("s.season", "<", season)
		.where("a.kind", "=", "given")
		.where("a.question_key", "in", keys)
		.where(
			sql<boolean>`(a.planting_id is null or a.planting_id = any(${plantings.map(({ plantingId }) => plantingId)}))`,
		)
		.where((eb) =>
			eb.or([
				...(ofTrees.length > 0 ? [eb("a.question_key", "not in", ofTrees)] : []),
				eb("a.answered_at", ">=", eb.ref("p.trees_told_at")),
			]),
		)
		.distinctOn(["a.question_key", "a.planting_id"])
		.orderBy("a.question_key")
		.orderBy("a.planting_id")
		.orderBy("s.season", "desc")
		.orderBy("a.answered_at", "desc")
		.select(answerColumns)
		.select("s.season")
		.execute();
	return rows.map((row) => {
		// What was confirmed of an earlier season says nothing of this one.
		const { confirmed: _, ...answer } = answerOf(row);
		return { season: row.season, answer };
	});
}
