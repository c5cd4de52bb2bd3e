import { type Kysely, sql } from "kysely";

// An invitation to a role, for whoever signs in with an address that the provider has verified and that the letter went to.
// Of its link only a hash is kept; the letter's worker makes the link, and one that is sent again ends the one before.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table auth.invitation (
		invitation_id uuid primary key default gen_random_uuid(),
		email text not null check (length(email) between 3 and 254),
		role text not null check (role in ('associate', 'coordinator', 'researcher')),
		state_fips text[] not null default '{}',
		language text not null check (language in ('en', 'es')),
		ends_on date,
		invited_by uuid not null references auth.person on delete restrict,
		invited_at timestamptz not null default now(),
		expires_at timestamptz not null,
		token_hash text constraint invitation_token_once unique,
		sent_at timestamptz,
		failed_as text check (failed_as in ('returned', 'uncertain', 'server_away')),
		accepted_by uuid references auth.person on delete restrict,
		accepted_at timestamptz,
		withdrawn_by uuid references auth.person on delete restrict,
		withdrawn_at timestamptz,
		constraint invitation_states_of_associates check ((role = 'associate') = (cardinality(state_fips) > 0)),
		constraint invitation_accepted_whole check (num_nonnulls(accepted_by, accepted_at) in (0, 2)),
		constraint invitation_withdrawn_whole check (num_nonnulls(withdrawn_by, withdrawn_at) in (0, 2)),
		constraint invitation_one_end check (accepted_at is null or withdrawn_at is null),
		-- What has ended keeps no link that could be tried.
		constraint invitation_ended_without_link check (
			token_hash is null or (accepted_at is null and withdrawn_at is null))
	)`.execute(db);
	await sql`create unique index invitation_one_open on auth.invitation (lower(email), role)
		where accepted_at is null and withdrawn_at is null`.execute(db);
	await sql`grant select, insert (email, role, state_fips, language, ends_on, invited_by, expires_at),
		update (invited_by, invited_at, expires_at, token_hash, sent_at, failed_as, accepted_by, accepted_at, withdrawn_by,
			withdrawn_at, state_fips, language, ends_on)
		on auth.invitation to tallygrove_app`.execute(db);
}
