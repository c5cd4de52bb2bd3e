import { randomUUID } from "node:crypto";
import { sql } from "kysely";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Grower } from "#app/auth/viewer.ts";
import { findOwnOperation } from "./own-operation.server.ts";

/**
 * Takes a leaving grower's own operation for the transaction, so that leaving twice at once happens once.
 * @returns undefined when it is not the viewer's, or has left.
 */
export async function lockOwnOperation(trx: Trx, viewer: Grower, operationId: string) {
	if (!(await findOwnOperation(trx, viewer, operationId))) return undefined;
	await trx
		.selectFrom("directory.operation")
		.select("operation_id")
		.where("operation_id", "=", operationId)
		.forUpdate()
		.execute();
	return findOwnOperation(trx, viewer, operationId);
}

/**
 * Frees the operations that were merged into one that leaves, so that they can leave as it does, each with its own answers.
 * @param trx under scope `network`: they are nobody's own.
 */
export async function freeMergedInto(trx: Trx, operationId: string) {
	return trx
		.updateTable("directory.operation")
		.set({ status: "active", merged_into: null })
		.where("merged_into", "=", operationId)
		.where("status", "=", "merged")
		.returning(["operation_id as operationId", "state_fips as stateFips"])
		.execute();
}

/** Blanks what is written down about an operation and marks it as having left. County, crops and counts of plants stay. */
export async function forgetOperation(
	trx: Trx,
	{ operationId, stateFips }: { operationId: string; stateFips: string },
) {
	await forgetListWork(trx, operationId);
	await trx.deleteFrom("directory.operation_pin").where("operation_id", "=", operationId).execute();
	await trx
		.updateTable("directory.planting")
		.set({ cultivar: "", area_acres: null, planted_year: null })
		.where("operation_id", "=", operationId)
		.execute();
	await trx
		.updateTable("directory.operation")
		.set({ name: "", contact_name: "", email: null, phone: null, mail_wanted: false })
		.set({ status: "left", left_at: sql`now()`, updated_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.execute();
	await logEvent(trx, {
		personId: null,
		action: "operation.left",
		subjectKind: "operation",
		subjectId: operationId,
		stateFips,
	});
}

/** What the desk's work on the list keeps of an operation: rows of files, what undoing would put back, searches by name. */
async function forgetListWork(trx: Trx, operationId: string): Promise<void> {
	await trx
		.updateTable("directory.import_row")
		.set({ cells: null, entry: null, restore: null, problems: "[]" })
		.where("operation_id", "=", operationId)
		.execute();
	await trx
		.updateTable("directory.merge")
		.set({ restore: null })
		.where((eb) => eb.or([eb("operation_id", "=", operationId), eb("dropped_id", "=", operationId)]))
		.execute();
	await sql`delete from directory.saved_view v using directory.operation o where o.operation_id = ${operationId}
		and length(v.query ->> 'q') > 2 and lower(v.query ->> 'q') = any (array[lower(o.name), lower(o.contact_name),
			lower(o.email), lower(o.phone)])`.execute(trx);
}

/**
 * Forgets the owner of an operation that has left. An owner who goes on with other operations keeps the name for these,
 * and this one gets an owner without.
 * @param trx under scope `network`: owners are nobody's own to write.
 */
export async function forgetOwner(trx: Trx, operationId: string): Promise<void> {
	const { owner_id: ownerId } = await trx
		.selectFrom("directory.operation")
		.select("owner_id")
		.where("operation_id", "=", operationId)
		.executeTakeFirstOrThrow();
	const others = await trx
		.selectFrom("directory.operation")
		.select("operation_id")
		.where("owner_id", "=", ownerId)
		.where("status", "=", "active")
		.limit(1)
		.execute();
	if (others.length === 0) {
		// Who is forgotten allows nothing any more.
		await trx
			.updateTable("directory.owner")
			.set({ name: "", publication_waived_at: null, publication_waived_by: null })
			.where("owner_id", "=", ownerId)
			.execute();
		return;
	}
	const nameless = randomUUID();
	await trx.insertInto("directory.owner").values({ owner_id: nameless, name: "" }).execute();
	await trx
		.updateTable("directory.operation")
		.set({ owner_id: nameless })
		.where("operation_id", "=", operationId)
		.execute();
}
