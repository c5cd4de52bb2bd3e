import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findOperation } from "./operations.server.ts";

export type Waiver = { recordedAt: Date; recordedBy: string };

/** What an operation's owner has allowed; undefined where nothing is recorded, or the operation is not the viewer's to see. */
export async function findWaiver(trx: Trx, viewer: Associate, operationId: string): Promise<Waiver | undefined> {
	const operation = await findOperation(trx, viewer, operationId);
	if (!operation) return undefined;
	const row = await trx
		.selectFrom("directory.owner as w")
		.innerJoin("auth.person as p", "p.person_id", "w.publication_waived_by")
		.select(["w.publication_waived_at as recordedAt", "p.display_name as recordedBy"])
		.where("w.owner_id", "=", operation.ownerId)
		.executeTakeFirst();
	return row?.recordedAt ? { recordedAt: row.recordedAt, recordedBy: row.recordedBy } : undefined;
}

/**
 * Records that an operation's owner allows figures that their own part could be worked out of, or that they no longer do.
 * It holds for all that the owner has, and counts from the next draft of a release. Twice is harmless.
 */
export async function recordWaiver(
	trx: Trx,
	viewer: Associate,
	operationId: string,
	allows: boolean,
): Promise<"recorded" | "unchanged" | "not_found"> {
	const operation = await findOperation(trx, viewer, operationId);
	if (!operation || operation.status !== "active") return "not_found";
	const changed = await trx
		.updateTable("directory.owner")
		.set(
			allows
				? { publication_waived_at: sql`now()`, publication_waived_by: viewer.personId }
				: { publication_waived_at: null, publication_waived_by: null },
		)
		.where("owner_id", "=", operation.ownerId)
		.where("publication_waived_at", allows ? "is" : "is not", null)
		.returning("owner_id")
		.executeTakeFirst();
	if (!changed) return "unchanged";
	await logEvent(trx, {
		personId: viewer.personId,
		action: allows ? "operation.publication_allowed" : "operation.publication_disallowed",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips: operation.stateFips,
	});
	return "recorded";
}
