import { type Kysely, sql } from "kysely";

// The network has one clock, whatever the states in it: that of most of them. By it the log is filtered by days, and a
// grant's last day ends.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create function auth.network_time_zone() returns text language sql stable parallel safe
		as $$ select coalesce((select mode() within group (order by time_zone) from directory.state), 'America/Chicago') $$`.execute(
		db,
	);
	await sql`create function auth.network_today() returns date language sql stable parallel safe
		as $$ select (now() at time zone auth.network_time_zone())::date $$`.execute(db);
	await sql`revoke execute on function auth.network_time_zone(), auth.network_today() from public`.execute(db);
	await sql`grant execute on function auth.network_time_zone(), auth.network_today() to tallygrove_app`.execute(db);
	// The log is asked for one person, or for one thing, among very many events.
	await sql`create index event_by_person on log.event (person_id, happened_at desc, event_id desc)`.execute(db);
	await sql`create index event_by_subject on log.event (subject_id, happened_at desc, event_id desc)`.execute(db);
}
