import type { Insertable, Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { Submission } from "#app/collect/answer-rows.server.ts";
import type { FormDefinition } from "#app/collect/form.ts";
import { listCorrections } from "#app/review/corrections.server.ts";
import { type Correction, restsOnSetAside, reviewAnswers } from "#app/review/reviewed-answers.ts";
import { type Fact, factsOf, type SubmittedResponse, type Unanswered, unansweredOf } from "./facts.ts";

type FactRow = { measure_key: string; crop_key: string; y: number | null; x: number | null; is_day: boolean };
type ReviewedRow = FactRow & { set_aside: boolean };

/**
 * Brings the facts of one response to its newest submission as review left it, under the owner, county, state and stratum
 * of the frozen frame. What review decided of an answer holds while the grower says the same; another answer is judged
 * anew. A response that was never sent in has no facts, nor one that was withdrawn or came after the closing. The caller
 * holds the response locked.
 */
export async function writeFacts(trx: Transaction<DB>, responseId: string): Promise<void> {
	const sent = await trx
		.selectFrom("collect.response as r")
		.innerJoin("collect.submission as b", "b.response_id", "r.response_id")
		.innerJoin("collect.frame_operation as f", (join) =>
			join.onRef("f.survey_id", "=", "r.survey_id").onRef("f.operation_id", "=", "r.operation_id"),
		)
		.where("r.response_id", "=", responseId)
		.where("b.withdrawn_at", "is", null)
		.where("b.late", "=", false)
		.orderBy("b.version", "desc")
		.limit(1)
		.select("b.answers")
		// A query of its own inside this one is planned in less time than two more joins.
		.select((eb) =>
			eb
				.selectFrom("collect.survey as s")
				.innerJoin("collect.form_version as v", "v.form_version_id", "s.form_version_id")
				.whereRef("s.survey_id", "=", "r.survey_id")
				.select("v.definition")
				.as("definition"),
		)
		.select(["f.survey_id", "f.operation_id", "f.owner_id", "f.county_fips", "f.state_fips", "f.stratum_key"])
		.executeTakeFirst();
	if (!sent) return;
	const { answers: submission, definition, ...frame } = sent;
	const corrections = await listCorrections(trx, responseId);
	const wanted = reviewedRows(definition as FormDefinition, submission as Submission, corrections);
	const held = await trx
		.selectFrom("collect.fact")
		.where("survey_id", "=", frame.survey_id)
		.where("operation_id", "=", frame.operation_id)
		.select(["measure_key", "crop_key", "y", "x", "is_day", "set_aside"])
		.execute();
	await dropFacts(trx, frame, held.filter(without(wanted, cellOf)));
	await putFacts(
		trx,
		wanted.filter(without(held, rowOf)).map((fact) => ({ ...frame, ...fact })),
	);
}

/**
 * What a response's facts are as rows. An answer that was asked for and not given is a row without figures, so that it is
 * counted where it is missing.
 */
export function factRows(definition: FormDefinition, response: SubmittedResponse): FactRow[] {
	const days = new Set(definition.measures.filter(({ kind }) => kind === "day").map(({ key }) => key));
	const facts: (Unanswered & Partial<Fact>)[] = [
		...factsOf(definition, response),
		...unansweredOf(definition, response),
	];
	return facts.map(({ measureKey, cropKey, y = null, x = null }) => ({
		measure_key: measureKey,
		crop_key: cropKey,
		y,
		x,
		is_day: days.has(measureKey),
	}));
}

/** The facts of a submission as review left it; those that rest on an answer that was set aside say so. */
export function reviewedRows(
	definition: FormDefinition,
	submission: Submission,
	corrections: readonly Correction[],
): ReviewedRow[] {
	const { answers, setAside } = reviewAnswers(definition, submission.answers, corrections);
	const isSetAside = restsOnSetAside(definition, submission.plantings, setAside);
	return factRows(definition, { ...submission, answers }).map((row) => ({
		...row,
		set_aside: isSetAside({ measureKey: row.measure_key, cropKey: row.crop_key }),
	}));
}

async function dropFacts(
	trx: Transaction<DB>,
	{ survey_id, operation_id }: { survey_id: string; operation_id: string },
	gone: Pick<FactRow, "measure_key" | "crop_key">[],
): Promise<void> {
	if (gone.length === 0) return;
	await trx
		.deleteFrom("collect.fact")
		.where("survey_id", "=", survey_id)
		.where("operation_id", "=", operation_id)
		.where((eb) => eb.or(gone.map(({ measure_key, crop_key }) => eb.and({ measure_key, crop_key }))))
		.execute();
}

/** One statement for new and changed facts alike, so that their tallies are made anew once. */
async function putFacts(trx: Transaction<DB>, facts: Insertable<DB["collect.fact"]>[]): Promise<void> {
	if (facts.length === 0) return;
	await trx
		.insertInto("collect.fact")
		.values(facts)
		.onConflict((conflict) =>
			conflict.columns(["survey_id", "measure_key", "crop_key", "operation_id"]).doUpdateSet((eb) => ({
				y: eb.ref("excluded.y"),
				x: eb.ref("excluded.x"),
				is_day: eb.ref("excluded.is_day"),
				set_aside: eb.ref("excluded.set_aside"),
			})),
		)
		.execute();
}

/** Whether a row has no like among the others. */
function without<T>(others: T[], keyOf: (row: T) => string): (row: T) => boolean {
	const keys = new Set(others.map(keyOf));
	return (row) => !keys.has(keyOf(row));
}

function cellOf({ measure_key, crop_key }: FactRow): string {
	return `${measure_key} ${crop_key}`;
}

function rowOf(fact: ReviewedRow): string {
	return [cellOf(fact), fact.y, fact.x, fact.is_day, fact.set_aside].join(" ");
}
