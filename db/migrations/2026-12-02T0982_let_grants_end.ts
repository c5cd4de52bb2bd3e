import { type Kysely, sql } from "kysely";

// A grant can have a last day, on the network's clock. Whether it holds is asked of the day at every request, so that it ends
// by itself; that it has ended is noted later, by a daily job or by the next grant of the same.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table auth.role_grant
		add column ends_on date,
		-- That its person was told of the end by mail; taken back when the day is moved.
		add column end_told_at timestamptz,
		add constraint role_grant_told_of_an_end check (end_told_at is null or ends_on is not null)`.execute(db);
	await sql`create index role_grant_by_end on auth.role_grant (ends_on) where revoked_at is null and ends_on is not null`.execute(
		db,
	);
	await sql`create function auth.grant_holds(revoked_at timestamptz, ends_on date) returns boolean
		language sql stable parallel safe
		as $$ select revoked_at is null and (ends_on is null or ends_on >= auth.network_today()) $$`.execute(db);
	await sql`revoke execute on function auth.grant_holds(timestamptz, date) from public`.execute(db);
	await sql`grant execute on function auth.grant_holds(timestamptz, date) to tallygrove_app`.execute(db);
}
