import { type Kysely, sql } from "kysely";

// A report waits for the minute that its approver set, is corrected in the open by a next version, and goes out as a page, as
// files and by mail. Who gets the mail is known to nobody but the worker and the pages on which one subscribes.
export async function up(db: Kysely<unknown>): Promise<void> {
	await letReportsWaitAndBeCorrected(db);
	await keepWorkOnReports(db);
	await keepFilesOfReports(db);
	await createReadership(db);
}

/** All versions of a report share its address; the next one says what changed, and nothing published is touched. */
async function letReportsWaitAndBeCorrected(db: Kysely<unknown>): Promise<void> {
	await sql`alter table publish.report
		drop constraint report_slug_key,
		drop constraint report_state_check,
		add column corrects uuid unique references publish.report on delete restrict,
		add column correction jsonb,
		add column approved_by uuid references auth.person on delete restrict,
		add column publish_at timestamptz,
		add constraint report_version unique (slug, version),
		add constraint report_state_check check (state in ('draft', 'submitted', 'scheduled', 'published')),
		add constraint report_correction_whole check ((version = 1) = (corrects is null)),
		add constraint report_correction_said check (
			state not in ('scheduled', 'published') or version = 1 or correction is not null),
		add constraint report_scheduled_whole check (
			(state = 'scheduled') <= (num_nonnulls(approved_by, publish_at) = 2)),
		add constraint report_approved_by_second_person check (approved_by <> created_by),
		add constraint report_not_approved_by_editor check (not (approved_by = any (edited_by))),
		add constraint report_not_before_its_minute check (published_at >= publish_at)`.execute(db);
	// One correction at a time.
	await sql`create unique index report_under_way on publish.report (slug) where state <> 'published'`.execute(db);
	await sql`grant select (corrects, correction) on publish.report to tallygrove_reader`.execute(db);
}

/** What was saved when and by whom, and what the second person has to say of it. */
async function keepWorkOnReports(db: Kysely<unknown>): Promise<void> {
	await sql`create table publish.report_edit (
		report_id uuid not null references publish.report on delete restrict,
		edit integer not null,
		content jsonb not null,
		saved_by uuid not null references auth.person on delete restrict,
		saved_at timestamptz not null default now(),
		primary key (report_id, edit)
	)`.execute(db);
	await sql`create table publish.report_comment (
		report_comment_id uuid primary key default gen_random_uuid(),
		report_id uuid not null references publish.report on delete restrict,
		block_id text check (block_id ~ '^[a-z0-9]{1,24}$'),
		body text not null check (length(body) between 1 and 4000),
		written_by uuid not null references auth.person on delete restrict,
		author_name text not null,
		written_at timestamptz not null default now(),
		resolved_by uuid references auth.person on delete restrict,
		resolved_at timestamptz,
		constraint report_comment_resolved_whole check (num_nonnulls(resolved_by, resolved_at) in (0, 2))
	)`.execute(db);
	await sql`create index report_comment_by_report on publish.report_comment (report_id, written_at)`.execute(db);
	await sql`grant select, insert, update on publish.report_edit to tallygrove_app`.execute(db);
	await sql`grant delete on publish.report_edit to tallygrove_app`.execute(db);
	await sql`grant select, insert, update (resolved_by, resolved_at) on publish.report_comment to tallygrove_app`.execute(
		db,
	);
}

/** PDFs, made by a job, and photos. A reader gets those of published reports, and not who gave consent to a photo. */
async function keepFilesOfReports(db: Kysely<unknown>): Promise<void> {
	await sql`create table publish.report_file (
		report_id uuid not null references publish.report on delete restrict,
		language text not null check (language in ('en', 'es')),
		made_at timestamptz not null default now(),
		bytes bytea,
		problem text check (problem in ('no_browser', 'failed')),
		primary key (report_id, language),
		constraint report_file_or_problem check (num_nonnulls(bytes, problem) = 1)
	)`.execute(db);
	await sql`create table publish.report_photo (
		report_photo_id uuid primary key default gen_random_uuid(),
		report_id uuid not null references publish.report on delete restrict,
		bytes bytea not null,
		width_px integer not null check (width_px > 0),
		height_px integer not null check (height_px > 0),
		consent_of text not null check (length(consent_of) between 1 and 200),
		consent_on date not null,
		added_by uuid not null references auth.person on delete restrict,
		added_at timestamptz not null default now()
	)`.execute(db);
	for (const table of ["report_file", "report_photo"]) {
		const name = sql.id("publish", table);
		await sql`alter table ${name} enable row level security`.execute(db);
		await sql`create policy of_published on ${name} for select to tallygrove_reader using (exists (
			select from publish.report r where r.report_id = ${sql.ref(`${table}.report_id`)} and r.state = 'published'))`.execute(
			db,
		);
		await sql`create policy all_reports on ${name} to tallygrove_app using (true) with check (true)`.execute(db);
	}
	await sql`grant select (report_id, language, made_at, bytes) on publish.report_file to tallygrove_reader`.execute(db);
	await sql`grant select (report_photo_id, report_id, bytes, width_px, height_px)
		on publish.report_photo to tallygrove_reader`.execute(db);
	await sql`grant select, insert, update on publish.report_file to tallygrove_app`.execute(db);
	await sql`grant select, insert on publish.report_photo to tallygrove_app`.execute(db);
}

/** Addresses that asked for reports, in a schema of their own, which the reader's role cannot even enter. */
async function createReadership(db: Kysely<unknown>): Promise<void> {
	await sql`create schema readership`.execute(db);
	await sql`grant usage on schema readership to tallygrove_app`.execute(db);
	const choice = sql`email text not null check (length(email) between 3 and 320),
		language text not null check (language in ('en', 'es')),
		-- Empty: all of them.
		crop_keys text[] not null default '{}',
		state_fips text[] not null default '{}'`;
	// Counts for nothing until the link in its mail was followed and its button pressed; swept after two days.
	await sql`create table readership.request (
		request_id uuid primary key default gen_random_uuid(),
		${choice},
		requested_at timestamptz not null default now()
	)`.execute(db);
	await sql`create table readership.subscriber (
		subscriber_id uuid primary key default gen_random_uuid(),
		${choice},
		confirmed_at timestamptz not null default now()
	)`.execute(db);
	await sql`create unique index subscriber_once on readership.subscriber (lower(email))`.execute(db);
	// One mail a report and subscriber, whatever becomes of the worker in between.
	await sql`create table readership.mailing (
		report_id uuid not null references publish.report on delete restrict,
		subscriber_id uuid not null references readership.subscriber on delete cascade,
		tried_at timestamptz,
		sent_at timestamptz,
		failed_as text check (failed_as in ('returned', 'uncertain', 'server_away')),
		primary key (report_id, subscriber_id)
	)`.execute(db);
	await sql`grant select, insert, update, delete on all tables in schema readership to tallygrove_app`.execute(db);
}
