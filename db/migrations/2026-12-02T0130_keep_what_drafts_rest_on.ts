import { type Kysely, sql } from "kysely";

// What each owner had answered when a draft was made. A revision is held against it: only so can it be told how many owners
// stand behind a change, after answers were corrected or withdrawn.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.release_draft_holding (
		release_draft_id uuid not null references collect.release_draft on delete cascade,
		owner_id uuid not null,
		county_fips text not null,
		crop_key text not null,
		amounts jsonb not null,
		-- Of every answer that figures are made of; the answers themselves are not kept here.
		digest text not null,
		primary key (release_draft_id, owner_id, county_fips, crop_key)
	)`.execute(db);
	await sql`alter table collect.release_draft_holding enable row level security`.execute(db);
	// Raw answers of every state: for the job that makes drafts and for no desk.
	await sql`create policy by_network on collect.release_draft_holding to tallygrove_app
		using (auth.scope() = 'network') with check (auth.scope() = 'network')`.execute(db);
	await sql`grant select, insert on collect.release_draft_holding to tallygrove_app`.execute(db);
}
