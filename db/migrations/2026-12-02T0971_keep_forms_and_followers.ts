import { type Kysely, sql } from "kysely";

// A release keeps the questions that its figures come from, and researchers can ask to be told when it changes.
export async function up(db: Kysely<unknown>): Promise<void> {
	await keepForms(db);
	await letReleasesBeFollowed(db);
}

/** Releases that were made before have no row: which wording growers saw was not kept with them. */
async function keepForms(db: Kysely<unknown>): Promise<void> {
	await sql`create table release.form (
		release_id uuid primary key references release.release on delete restrict,
		version integer not null,
		definition jsonb not null
	)`.execute(db);
	await sql`create trigger frozen before update or delete or truncate on release.form
		for each statement execute function release.refuse_change()`.execute(db);
	await sql`grant select on release.form to tallygrove_reader`.execute(db);
	await sql`grant select, insert on release.form to tallygrove_app`.execute(db);
}

async function letReleasesBeFollowed(db: Kysely<unknown>): Promise<void> {
	// All editions of one survey's figures: whoever follows one is told of the next.
	await sql`create table auth.release_follow (
		release_follow_id uuid primary key default gen_random_uuid(),
		person_id uuid not null references auth.person on delete restrict,
		series_id uuid not null,
		followed_at timestamptz not null default now(),
		constraint release_follow_once unique (person_id, series_id)
	)`.execute(db);
	await sql`create index release_follow_by_series on auth.release_follow (series_id)`.execute(db);
	// One mail a change and follower, whatever becomes of the worker in between.
	await sql`create table auth.change_mailing (
		release_follow_id uuid not null references auth.release_follow on delete cascade,
		release_id uuid not null references release.release on delete restrict,
		change text not null check (change in ('revised', 'withdrawn')),
		tried_at timestamptz,
		sent_at timestamptz,
		failed_as text check (failed_as in ('returned', 'uncertain', 'server_away')),
		primary key (release_follow_id, release_id, change)
	)`.execute(db);
	await sql`grant select, insert (person_id, series_id), delete on auth.release_follow to tallygrove_app`.execute(db);
	await sql`grant select, insert, update (tried_at, sent_at, failed_as) on auth.change_mailing to tallygrove_app`.execute(
		db,
	);
}
