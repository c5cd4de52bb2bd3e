import { type Kysely, sql } from "kysely";

// A survey can close while somebody answers it. What is sent in then is kept as late, apart from what counts.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.submission add column late boolean not null default false`.execute(db);
	await sql`alter table collect.response
		add column late_at timestamptz,
		drop constraint response_submitted_whole,
		add constraint response_submitted_whole check (
			num_nonnulls(first_submitted_at, submitted_at) in (0, 2)
			and (receipt_code is not null) = (submitted_at is not null or late_at is not null)),
		drop constraint response_withdrawn_not_sent,
		add constraint response_withdrawn_not_sent check (withdrawn_at is null or (submitted_at is null and late_at is null))`.execute(
		db,
	);
}
