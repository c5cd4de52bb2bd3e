import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";

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

/** Tries mail anew to those of these operations whose mail came back. @returns to how many. */
export async function tryAnew(trx: Trx, viewer: Associate, operationIds: string[]): Promise<number> {
	const returned = await trx
		.selectFrom("directory.operation")
		.select("operation_id")
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(operationIds))))
		.where((eb) => eb("state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.where("status", "=", "active")
		.where("email", "!=", "")
		.where("mail_returned_at", "is not", null)
		.orderBy("operation_id")
		.execute();
	for (const { operation_id } of returned) await markReachable(trx, operation_id);
	if (returned.length > 0)
		await logEvent(trx, {
			personId: viewer.personId,
			action: "operation.tried_anew",
			subjectKind: "operation",
			subjectId: returned.length === 1 ? returned[0]!.operation_id : "several",
			detail: { growers: returned.length },
		});
	return returned.length;
}
