import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";

/**
 * Marks an address as taking no mail, and its operation as undeliverable in the survey that found out. Nothing happens
 * when the address was mended while the mail was under way: the mark belongs to the old one.
 */
export async function markReturned(
	trx: Trx,
	{ surveyId, operationId, email }: { surveyId: string; operationId: string; email: string },
): Promise<void> {
	const marked = await trx
		.updateTable("directory.operation")
		.set({ mail_returned_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.where("email", "=", email)
		.returning("operation_id")
		.execute();
	if (marked.length === 0) return;
	await trx
		.updateTable("collect.frame_operation")
		.set({ disposition: "undeliverable", disposition_at: sql`now()` })
		.where("survey_id", "=", surveyId)
		.where("operation_id", "=", operationId)
		.where("disposition", "=", "not_reached")
		.execute();
}

/** After an address was mended, or is to be tried anew: mail goes there again, and open surveys count it as not reached. */
export async function markReachable(trx: Trx, operationId: string): Promise<void> {
	await trx
		.updateTable("directory.operation")
		.set({ mail_returned_at: null })
		.where("operation_id", "=", operationId)
		.where("mail_returned_at", "is not", null)
		.execute();
	await trx
		.updateTable("collect.frame_operation as f")
		.from("collect.survey as s")
		.set({ disposition: "not_reached", disposition_at: sql`now()` })
		.whereRef("s.survey_id", "=", "f.survey_id")
		.where("f.operation_id", "=", operationId)
		.where("f.disposition", "=", "undeliverable")
		.where("s.closed_at", "is", null)
		.where("s.closes_at", ">", sql<Date>`now()`)
		.execute();
}
