import { type Kysely, sql } from "kysely";

// A grower can take an answer back. What was sent in stays as a record, marked, and counts nowhere from then on.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.response
		add column withdrawn_at timestamptz,
		-- Whoever sends in again has not withdrawn: "answered" stays the one thing that submitted_at says.
		add constraint response_withdrawn_not_sent check (withdrawn_at is null or submitted_at is null)`.execute(db);
	await sql`alter table collect.submission add column withdrawn_at timestamptz`.execute(db);
	await sql`grant update (withdrawn_at) on collect.submission to tallygrove_app`.execute(db);
	// Only who sent it can take it back: neither a desk nor a job marks a submission.
	await sql`create policy by_its_grower on collect.submission as restrictive for update to tallygrove_app
		using (auth.scope() = 'grower')`.execute(db);
}
