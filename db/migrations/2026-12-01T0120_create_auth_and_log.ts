import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table auth.person (
		person_id uuid primary key default gen_random_uuid(),
		issuer text not null,
		subject text not null,
		display_name text not null check (length(display_name) between 1 and 200),
		email text check (length(email) <= 254),
		language text check (language in ('en', 'es')),
		created_at timestamptz not null default now(),
		-- The provider's subject is the key, never the e-mail: addresses are handed on.
		constraint person_once unique (issuer, subject)
	)`.execute(db);

	await sql`create table auth.role_grant (
		role_grant_id uuid primary key default gen_random_uuid(),
		person_id uuid not null references auth.person on delete restrict,
		role text not null check (role in ('grower', 'associate', 'coordinator', 'researcher')),
		state_fips text references directory.state on delete restrict,
		operation_id uuid references directory.operation on delete restrict,
		granted_by uuid references auth.person on delete restrict,
		granted_at timestamptz not null default now(),
		revoked_by uuid references auth.person on delete restrict,
		revoked_at timestamptz,
		constraint role_grant_whole check (
			(role = 'associate') = (state_fips is not null) and (role = 'grower') = (operation_id is not null))
	)`.execute(db);
	await sql`create unique index role_grant_once on auth.role_grant (person_id, role, coalesce(state_fips, ''), coalesce(operation_id::text, ''))
		where revoked_at is null`.execute(db);

	await sql`create table auth.access_request (
		access_request_id uuid primary key default gen_random_uuid(),
		person_id uuid not null references auth.person on delete restrict,
		affiliation text not null check (length(affiliation) between 1 and 200),
		purpose text not null check (length(purpose) between 1 and 4000),
		agreement_version text not null,
		agreed_at timestamptz not null,
		requested_at timestamptz not null default now(),
		decision text check (decision in ('approved', 'declined')),
		decision_reason text,
		decided_by uuid references auth.person on delete restrict,
		decided_at timestamptz,
		constraint access_request_decided_whole check (num_nonnulls(decision, decided_by, decided_at) in (0, 3)),
		constraint access_request_not_own check (decided_by <> person_id)
	)`.execute(db);
	await sql`create unique index access_request_one_open on auth.access_request (person_id) where decision is null`.execute(
		db,
	);

	await sql`create table auth.session (
		session_hash text primary key,
		person_id uuid references auth.person on delete cascade,
		-- A personal link's session: one operation's answers to one survey and nothing else.
		personal_link_id uuid,
		data jsonb not null default '{}',
		created_at timestamptz not null default now(),
		seen_at timestamptz not null default now(),
		expires_at timestamptz not null
	)`.execute(db);
	await sql`create index session_by_expiry on auth.session (expires_at)`.execute(db);

	await sql`grant select, insert, update on auth.person, auth.role_grant, auth.access_request to tallygrove_app`.execute(
		db,
	);
	await sql`grant select, insert, update, delete on auth.session to tallygrove_app`.execute(db);

	await sql`create table log.event (
		event_id bigint generated always as identity primary key,
		happened_at timestamptz not null default now(),
		person_id uuid references auth.person on delete restrict,
		action text not null check (action ~ '^[a-z_.]+$'),
		subject_kind text not null,
		subject_id text not null,
		state_fips text,
		detail jsonb not null default '{}'
	)`.execute(db);
	await sql`create index event_by_time on log.event (happened_at desc, event_id desc)`.execute(db);
	await sql`create table log.download (
		download_id bigint generated always as identity primary key,
		downloaded_at timestamptz not null default now(),
		person_id uuid not null references auth.person on delete restrict,
		release_id uuid not null,
		file_key text not null
	)`.execute(db);
	// Append-only: no role of the application can change or take away what was logged.
	await sql`grant select, insert on log.event, log.download to tallygrove_app`.execute(db);
}
