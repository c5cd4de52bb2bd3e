import type { Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { Submission } from "#app/collect/answer-rows.server.ts";
import type { FormDefinition } from "#app/collect/form.ts";
import { factsOf } from "./facts.ts";

/**
 * Rewrites the facts of one response from its newest submission, under the owner, county, state and stratum of the frozen
 * frame. What review set aside stays so while its figures are the same; new figures are judged anew. A response that was
 * never sent in has no facts, nor one that was withdrawn. The caller holds the response locked.
 */
export async function writeFacts(trx: Transaction<DB>, responseId: string): Promise<void> {
	const sent = await trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.submission as b", "b.response_id", "r.response_id")
		.innerJoin("collect.survey as s", "s.survey_id", "r.survey_id")
		.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
		.innerJoin("collect.frame_operation as f", (join) =>
			join.onRef("f.survey_id", "=", "r.survey_id").onRef("f.operation_id", "=", "r.operation_id"),
		)
		.where("r.response_id", "=", responseId)
		.where("b.withdrawn_at", "is", null)
		.orderBy("b.version", "desc")
		.limit(1)
		.select(["b.answers", "v.definition"])
		.select(["f.survey_id", "f.operation_id", "f.owner_id", "f.county_fips", "f.state_fips", "f.stratum_key"])
		.executeTakeFirst();
	if (!sent) return;
	const { answers: submission, definition, ...frame } = sent;
	const before = await trx
		.deleteFrom("collect.fact")
		.where("survey_id", "=", frame.survey_id)
		.where("operation_id", "=", frame.operation_id)
		.returning(["measure_key", "crop_key", "y", "x", "set_aside"])
		.execute();
	const setAside = new Set(before.filter((fact) => fact.set_aside).map(figuresOf));
	const facts = factsOf(definition as FormDefinition, submission as Submission)
		.map(({ measureKey, cropKey, y, x }) => ({ ...frame, measure_key: measureKey, crop_key: cropKey, y, x }))
		.map((fact) => ({ ...fact, set_aside: setAside.has(figuresOf(fact)) }));
	if (facts.length > 0) await trx.insertInto("collect.fact").values(facts).execute();
}

function figuresOf(fact: { measure_key: string; crop_key: string; y: number; x: number }): string {
	return [fact.measure_key, fact.crop_key, fact.y, fact.x].join(" ");
}
