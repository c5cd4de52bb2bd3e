import { type Kysely, sql } from "kysely";

// In the database and not in a process, so that servers beside each other count together. The columns are the ones that
// the limiter's library writes.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table auth.tries (
		key varchar(255) primary key,
		points integer not null default 0,
		expire bigint
	)`.execute(db);
	await sql`grant select, insert, update, delete on auth.tries to tallygrove_app`.execute(db);
}
