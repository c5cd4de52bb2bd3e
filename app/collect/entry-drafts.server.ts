import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { AnswerPlace } from "./answer-place.server.ts";
import type { StepValues } from "./posted.ts";

// The caller has found the place to be in the viewer's states; row-level security says the same.

/** What the viewer has typed of an operation's answers and not sent in. */
export function findEntryDraft(trx: Trx, viewer: Associate, { surveyId, operationId }: AnswerPlace) {
	return trx
		.selectFrom("collect.entry_draft")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("person_id", "=", viewer.personId)
		.select([sql<StepValues>`typed`.as("typed"), "started_at as startedAt", "saved_at as savedAt"])
		.executeTakeFirst();
}

/** Other associates who have begun to type in the same operation's answers: who and when, not what. */
export function listOtherEntryDrafts(trx: Trx, viewer: Associate, { surveyId, operationId }: AnswerPlace) {
	return trx
		.selectFrom("collect.entry_draft as d")
		.innerJoin("auth.person as p", "p.person_id", "d.person_id")
		.where("d.survey_id", "=", surveyId)
		.where("d.operation_id", "=", operationId)
		.where("d.person_id", "!=", viewer.personId)
		.orderBy("d.saved_at", "desc")
		.orderBy("d.person_id")
		.select(["p.display_name as personName", "d.saved_at as savedAt"])
		.execute();
}

/** Keeps what was typed, box by box as it stands, for the viewer alone to go on with. */
export async function keepEntryDraft(
	trx: Trx,
	viewer: Associate,
	{ surveyId, operationId }: AnswerPlace,
	{ mode, typed }: { mode: "telephone" | "paper"; typed: StepValues },
): Promise<void> {
	await trx
		.insertInto("collect.entry_draft")
		.values({
			survey_id: surveyId,
			operation_id: operationId,
			person_id: viewer.personId,
			mode,
			typed: JSON.stringify(typed),
		})
		.onConflict((conflict) =>
			conflict.columns(["survey_id", "operation_id", "person_id"]).doUpdateSet({
				mode,
				typed: JSON.stringify(typed),
				saved_at: sql`now()`,
			}),
		)
		.execute();
}

export async function endEntryDraft(trx: Trx, viewer: Associate, { surveyId, operationId }: AnswerPlace) {
	await trx
		.deleteFrom("collect.entry_draft")
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("person_id", "=", viewer.personId)
		.execute();
}

/** What the viewer has begun to type in for a survey and not sent in, newest first. */
export function listEntryDrafts(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.entry_draft as d")
		.innerJoin("directory.operation as o", "o.operation_id", "d.operation_id")
		.where("d.survey_id", "=", surveyId)
		.where("d.person_id", "=", viewer.personId)
		.orderBy("d.saved_at", "desc")
		.orderBy("d.operation_id")
		.limit(50)
		.select(["d.operation_id as operationId", "o.name", "d.saved_at as savedAt"])
		.execute();
}
