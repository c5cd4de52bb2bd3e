import { type Kysely, sql } from "kysely";

// A researcher's keys to the API. Only a hash is kept: whoever reads the table can use none of them.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table auth.api_key (
		api_key_id uuid primary key default gen_random_uuid(),
		person_id uuid not null references auth.person on delete restrict,
		label text not null check (length(label) between 1 and 80),
		-- The key's first letters, by which its owner tells it from others.
		key_start text not null check (length(key_start) between 4 and 12),
		key_hash text not null constraint api_key_hash_once unique,
		scopes text[] not null check (cardinality(scopes) > 0 and scopes <@ array['figures', 'files']),
		created_at timestamptz not null default now(),
		expires_at timestamptz not null check (expires_at > created_at),
		revoked_at timestamptz,
		last_used_at timestamptz
	)`.execute(db);
	await sql`create index api_key_by_person on auth.api_key (person_id)`.execute(db);
	await sql`grant select, insert (person_id, label, key_start, key_hash, scopes, expires_at), update (revoked_at, last_used_at)
		on auth.api_key to tallygrove_app`.execute(db);
}
