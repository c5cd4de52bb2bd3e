import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import { inChunks } from "./import-rows.server.ts";
import type { Progress, Restore } from "./run-import.server.ts";

type Written = { operationId: string; restore: Restore };

/**
 * What has come to rest on an import since: operations that were asked in a survey, can be signed in for, were written or
 * spoken to, merged, or changed by anybody. Undoing would take the ground from under it, or lose what was told since.
 */
export async function listInTheWay(trx: Trx, importId: string): Promise<string[]> {
	const { rows } = await sql<{ name: string }>`select coalesce(nullif(o.name, ''), o.operation_id::text) as name
		from directory.import i
			join directory.import_row r on r.import_id = i.import_id and r.restore is not null
			left join directory.operation o on o.operation_id = r.operation_id
		where i.import_id = ${importId} and (o.operation_id is null or o.status <> 'active' or o.updated_at <> i.imported_at
			or exists (select from directory.planting p where p.operation_id = o.operation_id
				and (p.created_at > i.imported_at or p.trees_told_at > i.imported_at))
			or exists (select from collect.frame_operation f join collect.survey s using (survey_id)
				where f.operation_id = o.operation_id and s.opened_at >= i.imported_at)
			or exists (select from directory.merge m where m.operation_id = o.operation_id and m.undone_at is null)
			or (r.restore ->> 'made' = 'operation' and (
				exists (select from auth.role_grant g where g.operation_id = o.operation_id)
				or exists (select from directory.merge m where o.operation_id in (m.operation_id, m.dropped_id))
				or exists (select from collect.contact c where c.operation_id = o.operation_id)
				or exists (select from directory.import_row other where other.operation_id = o.operation_id
					and other.import_id <> i.import_id and other.restore is not null))))
		order by r.row_number`.execute(trx);
	return rows.map(({ name }) => name);
}

/** Takes back what an import wrote: its operations go, and those that it changed are as they were. @returns their owners. */
export async function takeBack(
	trx: Trx,
	importId: string,
	tell: Progress,
): Promise<{ ownerIds: string[]; count: number }> {
	const rows = await trx
		.selectFrom("directory.import_row")
		.select(["operation_id", "restore"])
		.where("import_id", "=", importId)
		.where("restore", "is not", null)
		.orderBy("row_number")
		.execute();
	const written = rows.map((row) => ({ operationId: row.operation_id!, restore: row.restore as unknown as Restore }));
	let done = 0;
	for (const part of inChunks(written)) {
		await restoreChanged(trx, part);
		await removeMade(trx, part);
		await tell((done += part.length), written.length);
	}
	const ownerIds = written.flatMap(({ restore }) => (restore.made === "operation" ? restore.ownerId : []));
	return { ownerIds, count: written.length };
}

/** Owners that an import made and that have no operation any more. @param trx under scope `network`, which sees them. */
export async function removeOwners(trx: Trx, ownerIds: string[]): Promise<void> {
	await sql`delete from directory.owner w where w.owner_id = any (${ownerIds}::uuid[])
		and not exists (select from directory.operation o where o.owner_id = w.owner_id)`.execute(trx);
}

async function removeMade(trx: Trx, written: Written[]): Promise<void> {
	const ids = written.filter(({ restore }) => restore.made === "operation").map(({ operationId }) => operationId);
	await sql`delete from directory.operation where operation_id = any (${ids}::uuid[])`.execute(trx);
}

async function restoreChanged(trx: Trx, written: Written[]): Promise<void> {
	const changes = written.flatMap(({ restore }) => (restore.made === "change" ? restore : []));
	await sql`update directory.operation o set name = j.name, contact_name = j.contact_name, email = j.email,
			phone = j.phone, language = j.language, county_fips = j.county_fips, state_fips = j.state_fips,
			mail_returned_at = j.mail_returned_at, updated_at = now()
		from jsonb_to_recordset(${JSON.stringify(changes.map(({ before }) => before))}::jsonb) as j (operation_id uuid,
			name text, contact_name text, email text, phone text, language text, county_fips text, state_fips text,
			mail_returned_at timestamptz)
		where o.operation_id = j.operation_id`.execute(trx);
	const plantings = changes.flatMap((change) => change.plantings);
	const added = plantings.filter(({ before }) => before === null).map(({ plantingId }) => plantingId);
	await sql`delete from directory.planting where planting_id = any (${added}::uuid[])`.execute(trx);
	const before = plantings.flatMap(({ before: was }) => was ?? []);
	await sql`update directory.planting p set bearing_trees = j."bearingTrees", young_trees = j."youngTrees",
			area_acres = j."areaAcres", planted_year = j."plantedYear"
		from jsonb_to_recordset(${JSON.stringify(before)}::jsonb) as j
			("plantingId" uuid, "bearingTrees" int, "youngTrees" int, "areaAcres" float8, "plantedYear" int)
		where p.planting_id = j."plantingId"`.execute(trx);
}
