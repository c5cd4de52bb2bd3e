import { type Kysely, sql } from "kysely";

// How often a report was opened on a day, as its page or as its PDF. A number and nothing of who opened it; the reader's role,
// which draws the page, cannot enter this schema.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table readership.report_read (
		report_id uuid not null references publish.report on delete restrict,
		read_on date not null,
		kind text not null check (kind in ('page', 'pdf')),
		times integer not null check (times > 0),
		primary key (report_id, read_on, kind)
	)`.execute(db);
	await sql`grant select, insert, update (times) on readership.report_read to tallygrove_app`.execute(db);
}
