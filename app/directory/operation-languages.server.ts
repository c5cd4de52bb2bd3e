import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";

/** Sets the language in which these operations are written to. @returns how many had another. */
export async function setLanguages(
	trx: Trx,
	viewer: Associate,
	operationIds: string[],
	language: "en" | "es",
): Promise<number> {
	const changed = await trx
		.updateTable("directory.operation")
		.set({ language, updated_at: sql`now()` })
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(operationIds))))
		.where((eb) => eb("state_fips", "=", eb.fn.any(eb.val(viewer.stateFips))))
		.where("status", "=", "active")
		.where("language", "!=", language)
		.returning("operation_id")
		.execute();
	if (changed.length > 0)
		await logEvent(trx, {
			personId: viewer.personId,
			action: "operation.language_set",
			subjectKind: "operation",
			subjectId: changed.length === 1 ? changed[0]!.operation_id : "several",
			detail: { growers: changed.length, language },
		});
	return changed.length;
}
