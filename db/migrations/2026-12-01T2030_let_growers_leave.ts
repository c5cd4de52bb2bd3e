import { type Kysely, sql } from "kysely";

// A grower who leaves is forgotten: names become empty where rows must stay, since figures that are published rest on them.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table directory.operation
		add column left_at timestamptz,
		drop constraint operation_name_check,
		add constraint operation_named_until_it_left check (length(name) between 1 and 200 or (name = '' and left_at is not null)),
		add constraint operation_left_whole check (left_at is null or status = 'left')`.execute(db);
	// An owner stands before its operations, so that it has left cannot be told from its own row.
	await sql`alter table directory.owner
		drop constraint owner_name_check,
		add constraint owner_name_short check (length(name) <= 200)`.execute(db);
	await sql`alter table auth.person
		add column forgotten_at timestamptz,
		drop constraint person_display_name_check,
		add constraint person_named_until_forgotten check (
			length(display_name) between 1 and 200 or (display_name = '' and forgotten_at is not null))`.execute(db);

	// Of what was sent in, free texts go. Only its grower's scope can take away, and nothing can be made into something else.
	await sql`create function collect.refuse_rewriting() returns trigger language plpgsql as $$
		begin
			if not old.answers @> new.answers then
				raise exception 'submission_is_frozen' using errcode = 'insufficient_privilege';
			end if;
			return new;
		end $$`.execute(db);
	await sql`create trigger frozen before update on collect.submission
		for each row execute function collect.refuse_rewriting()`.execute(db);
	await sql`grant update (answers) on collect.submission to tallygrove_app`.execute(db);
}
