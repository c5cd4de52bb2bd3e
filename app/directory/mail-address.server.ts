import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findOperation } from "./operations.server.ts";

/** Writes down an operation's e-mail address; null takes it away. The log says that it was mended, and not to what. */
export async function mendAddress(
	trx: Trx,
	viewer: Associate,
	operationId: string,
	email: string | null,
): Promise<"mended" | "unchanged" | "not_found"> {
	const operation = await findOperation(trx, viewer, operationId);
	if (!operation || operation.status !== "active") return "not_found";
	if ((operation.email ?? null) === email) return "unchanged";
	await trx
		.updateTable("directory.operation")
		.set({ email, updated_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "operation.address_mended",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips: operation.stateFips,
	});
	return "mended";
}
