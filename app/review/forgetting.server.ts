import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";

/**
 * Empties what review kept of an operation that leaves: answers and words go, that something was decided and when stays.
 * What counts in released figures has its facts already. No link of a question works any more.
 */
export async function forgetFindings(trx: Trx, operationId: string): Promise<void> {
	const responses = trx.selectFrom("collect.response").where("operation_id", "=", operationId).select("response_id");
	const findings = trx
		.selectFrom("collect.edit_finding")
		.where("response_id", "in", responses)
		.select("edit_finding_id");
	await trx
		.updateTable("collect.edit_question")
		.set({ token_hash: null, expires_at: sql`now()` })
		.where("edit_finding_id", "in", findings)
		.execute();
	await trx
		.updateTable("collect.edit_finding_step")
		.set({ words: "" })
		.where("edit_finding_id", "in", findings)
		.where("words", "<>", "")
		.execute();
	await trx
		.updateTable("collect.correction")
		.set({ was: "{}", answer: null, reason: "" })
		.where("response_id", "in", responses)
		.execute();
	await trx
		.updateTable("collect.edit_finding")
		.set({ about: "[]", told: "{}" })
		.where("response_id", "in", responses)
		.execute();
}
