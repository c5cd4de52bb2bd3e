import { type Kysely, sql } from "kysely";

// One schema a stage of the flow, so that a role's rights can be told stage by stage: the reader gets `release` and
// published reports, and has no right on anything to their left.
export async function up(db: Kysely<unknown>): Promise<void> {
	for (const schema of ["directory", "collect", "release", "publish", "auth", "log"]) {
		await sql`create schema ${sql.id(schema)}`.execute(db);
	}
	await sql`revoke all on schema public from public`.execute(db);
	await sql`grant usage on schema directory, collect, release, publish, auth, log to tallygrove_app`.execute(db);
	await sql`grant usage on schema release, publish to tallygrove_reader`.execute(db);
	// The queue's tables belong to the role that runs jobs, since their row-level security lets only their owner in.
	await sql`create schema graphile_worker`.execute(db);
	await sql`grant all on schema graphile_worker to tallygrove_app`.execute(db);

	// Who asks, set for one transaction by `scopedTransaction`; nothing set means nothing seen.
	await sql`create function auth.scope() returns text language sql stable parallel safe
		as $$ select coalesce(current_setting('tallygrove.scope', true), '') $$`.execute(db);
	await sql`create function auth.scope_states() returns text[] language sql stable parallel safe
		as $$ select string_to_array(coalesce(nullif(current_setting('tallygrove.states', true), ''), '-'), ',') $$`.execute(
		db,
	);
	await sql`create function auth.scope_operations() returns uuid[] language sql stable parallel safe
		as $$ select coalesce(string_to_array(nullif(current_setting('tallygrove.operations', true), ''), ',')::uuid[], '{}') $$`.execute(
		db,
	);
	await sql`grant execute on all functions in schema auth to tallygrove_app`.execute(db);
}
