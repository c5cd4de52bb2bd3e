import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	// `edit` counts saves, so that two editors cannot overwrite each other unseen; `version` is what readers see.
	await sql`alter table publish.report
		add column edit integer not null default 1,
		add column note text check (length(note) between 1 and 4000),
		add column edited_by uuid[] not null default '{}',
		add constraint report_not_by_editor check (not (published_by = any (edited_by)))`.execute(db);

	// What readers have seen is never changed under them, whoever writes.
	await sql`create function publish.refuse_change() returns trigger language plpgsql as $$
		begin raise exception 'published_report_is_frozen' using errcode = 'insufficient_privilege'; end $$`.execute(db);
	await sql`create trigger frozen before update or delete on publish.report
		for each row when (old.state = 'published') execute function publish.refuse_change()`.execute(db);
}
