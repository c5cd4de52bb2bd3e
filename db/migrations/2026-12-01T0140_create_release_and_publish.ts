import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table release.release (
		release_id uuid primary key,
		number integer not null generated always as identity unique,
		season integer not null,
		form_key text not null,
		title jsonb not null,
		published_at timestamptz not null default now(),
		rules jsonb not null,
		method jsonb not null,
		audit jsonb not null,
		code_version text not null,
		checksum text not null
	)`.execute(db);
	await sql`create table release.area (
		release_id uuid not null references release.release on delete restrict,
		area_key text not null,
		kind text not null check (kind in ('county', 'district', 'state', 'region')),
		parent_key text,
		state_fips text,
		name text not null,
		primary key (release_id, area_key)
	)`.execute(db);
	await sql`create table release.measure (
		release_id uuid not null references release.release on delete restrict,
		measure_key text not null,
		position integer not null,
		label jsonb not null,
		description jsonb not null,
		kind text not null check (kind in ('ratio', 'mean', 'total', 'proportion')),
		unit text not null,
		decimals integer not null check (decimals between 0 and 6),
		worse text check (worse in ('more', 'less')),
		hue text not null,
		primary key (release_id, measure_key)
	)`.execute(db);
	await sql`create table release.cell (
		release_id uuid not null,
		crop_key text not null,
		area_key text not null,
		status text not null check (status in ('shown', 'withheld', 'no_growers')),
		respondents_band text,
		primary key (release_id, crop_key, area_key),
		foreign key (release_id, area_key) references release.area on delete restrict,
		constraint cell_band_only_when_shown check ((status = 'shown') = (respondents_band is not null))
	)`.execute(db);
	await sql`create table release.figure (
		release_id uuid not null,
		measure_key text not null,
		crop_key text not null,
		area_key text not null,
		value double precision,
		standard_error double precision,
		cv double precision,
		lower_bound double precision,
		upper_bound double precision,
		steadiness text not null check (steadiness in ('steady', 'care', 'rough')),
		primary key (release_id, measure_key, crop_key, area_key),
		foreign key (release_id, crop_key, area_key) references release.cell on delete restrict,
		foreign key (release_id, measure_key) references release.measure on delete restrict,
		-- Too rough to publish: the row says so and carries no number.
		constraint figure_rough_has_no_number check (steadiness <> 'rough' or num_nonnulls(value, standard_error, cv, lower_bound, upper_bound) = 0)
	)`.execute(db);

	// A figure of a cell that is not shown cannot be stored, whoever writes it; nothing published is ever edited.
	await sql`create function release.refuse_hidden_figure() returns trigger language plpgsql as $$
		begin
			if not exists (select from release.cell c where c.release_id = new.release_id and c.crop_key = new.crop_key
				and c.area_key = new.area_key and c.status = 'shown') then
				raise exception 'figure_of_hidden_cell' using errcode = 'check_violation';
			end if;
			return new;
		end $$`.execute(db);
	await sql`create trigger figure_of_shown_cell before insert on release.figure
		for each row execute function release.refuse_hidden_figure()`.execute(db);
	await sql`create function release.refuse_change() returns trigger language plpgsql as $$
		begin raise exception 'published_figures_are_frozen' using errcode = 'insufficient_privilege'; end $$`.execute(db);
	for (const table of ["release", "area", "measure", "cell", "figure"]) {
		await sql`create trigger frozen before update or delete or truncate on ${sql.id("release", table)}
			for each statement execute function release.refuse_change()`.execute(db);
	}
	await sql`grant select on all tables in schema release to tallygrove_reader`.execute(db);
	await sql`grant select, insert on all tables in schema release to tallygrove_app`.execute(db);

	await sql`create table publish.report (
		report_id uuid primary key default gen_random_uuid(),
		slug text not null unique check (slug ~ '^[a-z0-9]+(-[a-z0-9]+)*$'),
		release_id uuid not null references release.release on delete restrict,
		state text not null default 'draft' check (state in ('draft', 'submitted', 'published')),
		content jsonb not null,
		version integer not null default 1,
		created_by uuid not null,
		author_name text not null,
		created_at timestamptz not null default now(),
		updated_at timestamptz not null default now(),
		submitted_at timestamptz,
		published_by uuid,
		published_at timestamptz,
		constraint report_published_whole check ((state = 'published') = (published_at is not null)
			and num_nonnulls(published_by, published_at) in (0, 2)),
		constraint report_second_person check (published_by <> created_by)
	)`.execute(db);
	await sql`alter table publish.report enable row level security`.execute(db);
	await sql`create policy published_only on publish.report for select to tallygrove_reader using (state = 'published')`.execute(
		db,
	);
	await sql`create policy all_reports on publish.report to tallygrove_app using (true)`.execute(db);
	// A column list: who wrote or approved a report (person ids) is not the public's.
	await sql`grant select (report_id, slug, release_id, state, content, version, author_name, updated_at, published_at)
		on publish.report to tallygrove_reader`.execute(db);
	await sql`grant select, insert, update on publish.report to tallygrove_app`.execute(db);
}
