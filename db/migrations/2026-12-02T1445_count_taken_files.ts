import { type Kysely, sql } from "kysely";

// How often a file of a release was taken from the open pages on a day. A number and nothing of who took it, as with reads of
// reports.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table readership.file_taken (
		release_id uuid not null references release.release on delete restrict,
		file_name text not null check (length(file_name) between 1 and 100),
		taken_on date not null,
		times integer not null check (times > 0),
		primary key (release_id, file_name, taken_on)
	)`.execute(db);
	await sql`grant select, insert, update (times) on readership.file_taken to tallygrove_app`.execute(db);
}
