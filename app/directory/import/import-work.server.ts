import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { ImportChoices } from "./columns.ts";
import type { ImportFailure, ImportStatus } from "./imports.server.ts";
import type { Existing } from "./check-rows.ts";
import type { Places } from "./places.ts";

/** What queued work needs to know of an import, which it takes for itself until it is done. */
export async function takeImport(trx: Trx, importId: string, status: ImportStatus) {
	// One job at a time: a second one, rung because the first seemed dead, waits and then finds the step done.
	await sql`select pg_advisory_xact_lock(hashtextextended(${`import ${importId}`}, 0))`.execute(trx);
	const row = await trx
		.selectFrom("directory.import")
		.select(["state_fips as stateFips", "file"])
		.select(sql<string>`coalesce(undone_by, person_id)`.as("personId"))
		.select(sql<ImportChoices | null>`choices`.as("choices"))
		.where("import_id", "=", importId)
		.where("status", "=", status)
		.executeTakeFirst();
	return row;
}

/** The states that a person is granted now. */
export async function grantedStates(trx: Trx, personId: string): Promise<string[]> {
	const rows = await trx
		.selectFrom("auth.role_grant")
		.select("state_fips")
		.where("person_id", "=", personId)
		.where("role", "=", "associate")
		.where(sql<boolean>`auth.grant_holds(revoked_at, ends_on)`)
		.execute();
	return rows.flatMap(({ state_fips }) => state_fips ?? []);
}

type End = {
	status: ImportStatus;
	failure?: ImportFailure;
	header?: string[];
	counts?: unknown;
	total?: number;
};

/** Ends a step, well or not. */
export async function endStep(trx: Trx, importId: string, { status, failure, header, counts }: End): Promise<void> {
	await trx
		.updateTable("directory.import")
		.set({ status, failure: failure ? JSON.stringify(failure) : null, touched_at: sql`now()` })
		.$if(header !== undefined, (row) => row.set({ header: JSON.stringify(header), file: null }))
		.$if(counts !== undefined, (row) => row.set({ counts: JSON.stringify(counts) }))
		.$if(status === "imported" && failure === undefined, (row) => row.set({ imported_at: sql`now()` }))
		.where("import_id", "=", importId)
		.execute();
}

export async function noteProgress(trx: Trx, importId: string, done: number, total: number): Promise<void> {
	await trx
		.updateTable("directory.import")
		.set({ done, total, touched_at: sql`now()` })
		.where("import_id", "=", importId)
		.execute();
}

export async function noteUndone(trx: Trx, importId: string, personId: string): Promise<void> {
	await trx
		.updateTable("directory.import")
		.set({ status: "undone", failure: null, undone_by: personId, undone_at: sql`now()`, touched_at: sql`now()` })
		.where("import_id", "=", importId)
		.execute();
}

/** Counties and states of the whole network: one that is known but not granted is told apart from one that is misspelt. */
export async function listPlaces(trx: Trx, granted: readonly string[]): Promise<Places> {
	const states = await trx
		.selectFrom("directory.state")
		.select(["state_fips as stateFips", "name", "postal"])
		.orderBy("name")
		.execute();
	const counties = await trx
		.selectFrom("directory.county")
		.select(["county_fips as countyFips", "state_fips as stateFips", "name"])
		.orderBy("name")
		.execute();
	return { states, counties, granted };
}

/** Who is in the list of these states. */
export async function listExisting(trx: Trx, stateFips: readonly string[]): Promise<Existing[]> {
	return trx
		.selectFrom("directory.operation")
		.select(["operation_id as operationId", "name", "email", "county_fips as countyFips"])
		.where(sql<boolean>`state_fips = any (${[...stateFips]}::text[])`)
		.where("status", "=", "active")
		.execute();
}

/**
 * Clears away what files brought and nobody needs any more: files that were never imported, and the rows of those that were,
 * with what undoing them needs. That an import was stays told.
 */
export async function clearOldImports(trx: Trx, days: { unfinished: number; finished: number }): Promise<number> {
	const gone = await sql`delete from directory.import where status in ('reading', 'columns', 'checking', 'checked')
		and touched_at < now() - ${days.unfinished} * interval '1 day'`.execute(trx);
	const cleared = await sql`delete from directory.import_row r using directory.import i where i.import_id = r.import_id
		and i.status in ('imported', 'undone') and i.touched_at < now() - ${days.finished} * interval '1 day'`.execute(trx);
	return Number(gone.numAffectedRows ?? 0) + Number(cleared.numAffectedRows ?? 0);
}
