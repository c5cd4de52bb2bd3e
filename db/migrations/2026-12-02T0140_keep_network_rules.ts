import { type Kysely, sql } from "kysely";

// The network's settings: who counts as too few, as dominating, and what is steady. Every change is a row of its own, so that
// it can be told which held when.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table directory.network_rules (
		network_rules_id integer primary key generated always as identity,
		rules jsonb not null,
		set_by uuid not null references auth.person on delete restrict,
		set_at timestamptz not null default now()
	)`.execute(db);
	await sql`grant select, insert on directory.network_rules to tallygrove_app`.execute(db);
}
