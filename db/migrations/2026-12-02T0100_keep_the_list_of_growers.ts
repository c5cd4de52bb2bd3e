import { type Kysely, sql } from "kysely";

// What an associate does with the list of growers: views that are kept, duplicates made one, lists read in from a file,
// contacts noted. What can be undone keeps beside it what it replaced.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table directory.operation
		add column merged_into uuid references directory.operation on delete restrict,
		drop constraint operation_status_check,
		add constraint operation_status_check check (status in ('active', 'left', 'merged')),
		add constraint operation_merged_whole check (case status when 'merged' then merged_into is not null
			when 'active' then merged_into is null else true end)`.execute(db);
	await sql`create index operation_by_merge on directory.operation (merged_into) where merged_into is not null`.execute(
		db,
	);
	await sql`create index operation_by_email on directory.operation (lower(email))`.execute(db);

	await sql`create table directory.saved_view (
		saved_view_id uuid primary key default gen_random_uuid(),
		person_id uuid not null references auth.person on delete cascade,
		name text not null check (length(name) between 1 and 80),
		-- The parts of the list's address.
		query jsonb not null,
		saved_at timestamptz not null default now(),
		constraint saved_view_name_once unique (person_id, name)
	)`.execute(db);

	await createMerge(db);
	await createImport(db);
	await createContact(db);
	await letTheDeskDelete(db);
}

/** `operation_id` is the one that was kept; `restore` is what undoing puts back, until the operation is forgotten. */
async function createMerge(db: Kysely<unknown>): Promise<void> {
	await sql`create table directory.merge (
		merge_id uuid primary key default gen_random_uuid(),
		operation_id uuid not null references directory.operation on delete restrict,
		dropped_id uuid not null references directory.operation on delete restrict,
		restore jsonb,
		merged_by uuid not null references auth.person on delete restrict,
		merged_at timestamptz not null default now(),
		undone_by uuid references auth.person on delete restrict,
		undone_at timestamptz,
		constraint merge_of_two check (operation_id <> dropped_id),
		constraint merge_undone_whole check (num_nonnulls(undone_by, undone_at) in (0, 2))
	)`.execute(db);
	await sql`create unique index merge_dropped_once on directory.merge (dropped_id) where undone_at is null`.execute(db);
	await sql`create index merge_by_operation on directory.merge (operation_id)`.execute(db);
	// Two that look alike and were said to be two.
	await sql`create table directory.distinct_pair (
		operation_id uuid not null references directory.operation on delete cascade,
		other_id uuid not null references directory.operation on delete cascade,
		said_by uuid not null references auth.person on delete restrict,
		said_at timestamptz not null default now(),
		constraint distinct_pair_of_two check (operation_id <> other_id),
		primary key (operation_id, other_id)
	)`.execute(db);
	for (const table of ["merge", "distinct_pair"]) {
		const name = sql.id("directory", table);
		await sql`alter table ${name} enable row level security`.execute(db);
		await sql`create policy by_scope on ${name} to tallygrove_app using (exists (
			select from directory.operation o where o.operation_id = ${sql.id(table)}.operation_id))`.execute(db);
	}
}

/** A file can hold growers of several states, and of none that was granted: only who holds all that its reader held sees it. */
async function createImport(db: Kysely<unknown>): Promise<void> {
	await sql`create table directory.import (
		import_id uuid primary key default gen_random_uuid(),
		person_id uuid not null references auth.person on delete restrict,
		state_fips text[] not null check (cardinality(state_fips) > 0),
		file_name text not null check (length(file_name) <= 200),
		-- Until its rows are read.
		file bytea,
		status text not null default 'reading' check (status in
			('reading', 'columns', 'checking', 'checked', 'importing', 'imported', 'undoing', 'undone', 'dropped')),
		header jsonb,
		choices jsonb,
		counts jsonb,
		failure jsonb,
		done integer not null default 0,
		total integer not null default 0,
		created_at timestamptz not null default now(),
		touched_at timestamptz not null default now(),
		imported_at timestamptz,
		undone_by uuid references auth.person on delete restrict,
		undone_at timestamptz
	)`.execute(db);
	await sql`create index import_by_time on directory.import (created_at desc, import_id)`.execute(db);
	await sql`create table directory.import_row (
		import_id uuid not null references directory.import on delete cascade,
		row_number integer not null,
		-- The row as it stood in the file, and what was read from it; both go some time after the import.
		cells jsonb,
		entry jsonb,
		problems jsonb not null default '[]',
		-- The first row of the same operation: each planting has a row of its own.
		first_row integer,
		choice text check (choice in ('create', 'update', 'skip')),
		-- The operation that it matches; once imported, the one that it made.
		operation_id uuid references directory.operation on delete set null,
		-- What undoing needs to know.
		restore jsonb,
		primary key (import_id, row_number)
	)`.execute(db);
	await sql`create index import_row_by_operation on directory.import_row (operation_id)`.execute(db);
	await sql`alter table directory.import enable row level security`.execute(db);
	await sql`alter table directory.import_row enable row level security`.execute(db);
	await sql`create policy by_scope on directory.import to tallygrove_app using (auth.scope() = 'network'
		or (auth.scope() = 'desk' and state_fips <@ auth.scope_states()))`.execute(db);
	await sql`create policy by_scope on directory.import_row to tallygrove_app using (
		(auth.scope() = 'grower' and operation_id = any (auth.scope_operations()))
		or (exists (select from directory.import i where i.import_id = import_row.import_id)
			and (operation_id is null or exists (
				select from directory.operation o where o.operation_id = import_row.operation_id))))`.execute(db);
}

async function createContact(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.contact (
		contact_id uuid primary key default gen_random_uuid(),
		operation_id uuid not null references directory.operation on delete restrict,
		survey_id uuid references collect.survey on delete restrict,
		person_id uuid not null references auth.person on delete restrict,
		made_at timestamptz not null default now(),
		way text not null check (way in ('telephone', 'visit', 'letter', 'other')),
		outcome text not null check (outcome in ('reached', 'no_answer', 'message_left', 'call_back', 'refused', 'wrong_number')),
		note text not null default '' check (length(note) <= 2000),
		next_on date
	)`.execute(db);
	await sql`create index contact_by_operation on collect.contact (operation_id, made_at desc)`.execute(db);
	await sql`alter table collect.contact enable row level security`.execute(db);
	await sql`create policy by_scope on collect.contact to tallygrove_app using (exists (
		select from directory.operation o where o.operation_id = contact.operation_id))`.execute(db);
}

/** What an import made is taken away when the import is undone, while nothing rests on it; growers take away none. */
async function letTheDeskDelete(db: Kysely<unknown>): Promise<void> {
	for (const table of ["owner", "operation", "planting"]) {
		await sql`create policy no_grower_deletes on ${sql.id("directory", table)} as restrictive for delete
			to tallygrove_app using (auth.scope() in ('desk', 'network'))`.execute(db);
	}
	await sql`grant delete on directory.owner, directory.operation, directory.planting to tallygrove_app`.execute(db);
	await sql`grant select, insert, update, delete on directory.saved_view, directory.import, directory.import_row,
		directory.distinct_pair, collect.contact to tallygrove_app`.execute(db);
	await sql`grant select, insert, update on directory.merge to tallygrove_app`.execute(db);
}
