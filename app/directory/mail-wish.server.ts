import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";

/** Whom a token that stops mail concerns, and whether mail is wanted now. @returns undefined for who is there no more. */
export async function findMailWish(trx: Trx, operationId: string) {
	const row = await trx
		.selectFrom("directory.operation")
		.select(["name", "language", "mail_wanted as mailWanted"])
		.where("operation_id", "=", operationId)
		.where("status", "=", "active")
		.executeTakeFirst();
	return row && { ...row, language: row.language === "es" ? ("es" as const) : ("en" as const) };
}

/**
 * Stops an operation's mail about surveys, or lets it come again: the same wish that its settings show. Said twice, it
 * changes nothing.
 */
export async function setMailWish(trx: Trx, operationId: string, mailWanted: boolean): Promise<"set" | "not_found"> {
	if (!(await findMailWish(trx, operationId))) return "not_found";
	const changed = await trx
		.updateTable("directory.operation")
		.set({ mail_wanted: mailWanted, updated_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.where("mail_wanted", "!=", mailWanted)
		.returning("state_fips")
		.executeTakeFirst();
	if (changed)
		await logEvent(trx, {
			personId: null,
			action: mailWanted ? "operation.mail_resumed" : "operation.mail_stopped",
			subjectKind: "operation",
			subjectId: operationId,
			stateFips: changed.state_fips,
		});
	return "set";
}
