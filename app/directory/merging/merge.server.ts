import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "#app/auth/event-log.server.ts";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { findOperation } from "../operations.server.ts";

/** What a merge may take over from the one that is dropped. */
export const mergeFields = ["name", "contactName", "email", "phone", "language"] as const;
export type MergeField = (typeof mergeFields)[number];
export type MergeChoice = { take: MergeField[]; plantingIds: string[] };
type Told = Record<MergeField, string | null> & { mailReturnedAt: string | null };
/** What undoing puts back, and what it must find to do so exactly. `others` is of other stages, which see to it themselves. */
export type MergeRestore = { before: Told; after: Told; plantingIds: string[]; others: unknown };

/** Both operations of a merge, for the transaction: two merges at once of one of them happen one after the other. */
export async function lockPair(trx: Trx, viewer: Associate, keptId: string, droppedId: string) {
	if (keptId === droppedId) return undefined;
	const seen = async () => {
		const [kept, dropped] = [await findOperation(trx, viewer, keptId), await findOperation(trx, viewer, droppedId)];
		return kept && dropped && { kept, dropped };
	};
	if (!(await seen())) return undefined;
	await trx
		.selectFrom("directory.operation")
		.select("operation_id")
		.where("operation_id", "in", [keptId, droppedId])
		.orderBy("operation_id")
		.forUpdate()
		.execute();
	return seen();
}
export type Merging = NonNullable<Awaited<ReturnType<typeof lockPair>>>;

/** Makes one of two: what was chosen goes over, and the other stands aside with all that was ever answered for it. */
export async function mergeOperations(
	trx: Trx,
	viewer: Associate,
	{ kept, dropped }: Merging,
	{ take, plantingIds }: MergeChoice,
	others: unknown,
): Promise<void> {
	const before = toldOf(kept);
	const after = { ...before };
	for (const field of take) after[field] = toldOf(dropped)[field];
	if (take.includes("email")) after.mailReturnedAt = toldOf(dropped).mailReturnedAt;
	await writeTold(trx, kept.operationId, after);
	const moved = dropped.plantings
		.filter(({ plantingId }) => plantingIds.includes(plantingId))
		.map((one) => one.plantingId);
	await movePlantings(trx, moved, kept.operationId);
	await trx
		.updateTable("directory.operation")
		.set({ status: "merged", merged_into: kept.operationId, updated_at: sql`now()` })
		.where("operation_id", "=", dropped.operationId)
		.execute();
	const restore: MergeRestore = { before, after, plantingIds: moved, others };
	await trx
		.insertInto("directory.merge")
		.values({
			operation_id: kept.operationId,
			dropped_id: dropped.operationId,
			merged_by: viewer.personId,
			restore: JSON.stringify(restore),
		})
		.execute();
	await note(trx, viewer, "operation.merged", kept);
}

/** A merge that stands and can be looked into, with both operations, for the transaction. */
export async function lockMerge(trx: Trx, viewer: Associate, mergeId: string) {
	if (!z.guid().safeParse(mergeId).success) return undefined;
	const row = await trx
		.selectFrom("directory.merge")
		.select(["operation_id", "dropped_id", "restore", "merged_at as mergedAt"])
		.where("merge_id", "=", mergeId)
		.where("undone_at", "is", null)
		.where("restore", "is not", null)
		.forUpdate()
		.executeTakeFirst();
	const pair = row && (await lockPair(trx, viewer, row.operation_id, row.dropped_id));
	return pair && { ...pair, mergeId, mergedAt: row.mergedAt, restore: row.restore as unknown as MergeRestore };
}
export type StandingMerge = NonNullable<Awaited<ReturnType<typeof lockMerge>>>;

/** Whether either operation has changed since they were merged, so that undoing could not put back what was. */
export function hasChanged({ kept, dropped, restore }: StandingMerge): boolean {
	const now = toldOf(kept);
	const same = (Object.keys(now) as (keyof Told)[]).every((field) => now[field] === restore.after[field]);
	const standing = new Set(kept.plantings.filter(({ removedOn }) => removedOn === null).map((one) => one.plantingId));
	const isThere = restore.plantingIds.every((id) => standing.has(id));
	return !same || !isThere || kept.status !== "active" || dropped.status !== "merged";
}

/** Makes two of one again, as they were. */
export async function unmergeOperations(trx: Trx, viewer: Associate, merge: StandingMerge): Promise<void> {
	const { kept, dropped, restore, mergeId } = merge;
	await writeTold(trx, kept.operationId, restore.before);
	await movePlantings(trx, restore.plantingIds, dropped.operationId);
	await trx
		.updateTable("directory.operation")
		.set({ status: "active", merged_into: null, updated_at: sql`now()` })
		.where("operation_id", "=", dropped.operationId)
		.execute();
	await trx
		.updateTable("directory.merge")
		.set({ undone_by: viewer.personId, undone_at: sql`now()`, restore: null })
		.where("merge_id", "=", mergeId)
		.execute();
	await note(trx, viewer, "operation.merge_undone", kept);
}

function toldOf({ name, contactName, email, phone, language, mailReturnedAt }: Merging["kept"]): Told {
	return { name, contactName, email, phone, language, mailReturnedAt: mailReturnedAt?.toISOString() ?? null };
}

async function writeTold(trx: Trx, operationId: string, told: Told): Promise<void> {
	await trx
		.updateTable("directory.operation")
		.set({ name: told.name!, contact_name: told.contactName!, email: told.email, phone: told.phone })
		.set({ language: told.language!, mail_returned_at: told.mailReturnedAt, updated_at: sql`now()` })
		.where("operation_id", "=", operationId)
		.execute();
}

async function movePlantings(trx: Trx, plantingIds: string[], operationId: string): Promise<void> {
	await sql`update directory.planting set operation_id = ${operationId}
		where planting_id = any (${plantingIds}::uuid[])`.execute(trx);
}

function note(
	trx: Trx,
	viewer: Associate,
	action: "operation.merged" | "operation.merge_undone",
	kept: Merging["kept"],
) {
	const { operationId, stateFips } = kept;
	return logEvent(trx, {
		personId: viewer.personId,
		action,
		subjectKind: "operation",
		subjectId: operationId,
		stateFips,
	});
}
