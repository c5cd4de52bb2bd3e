import { type Kysely, sql } from "kysely";

// The desk's first page reads whom to invite, who has no address and what came late off indexes of just these (50,000
// operations: 60,000 rows gone through instead of 290,000), and the planner hears of a list as soon as it has grown much, as it
// does of a frame: not knowing, it took a list of 50,000 for a handful and sorted all of it for a page.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create index mailing_invites on collect.mailing (survey_id, state_fips) include (operation_id)
		where kind = 'invitation' and failed_at is null`.execute(db);
	await sql`create index frame_operation_awaited on collect.frame_operation (survey_id, state_fips) include (operation_id)
		where disposition in ('not_reached', 'reached', 'partial')`.execute(db);
	await sql`create index operation_without_address on directory.operation (state_fips) include (operation_id)
		where coalesce(email, '') = '' and left_at is null`.execute(db);
	await sql`create index response_late on collect.response (state_fips) where late_at is not null`.execute(db);
	await sql`create function directory.know_operations() returns void language plpgsql security definer
		set search_path = '' as $$
		begin
			analyze directory.owner, directory.operation, directory.planting;
		end $$`.execute(db);
	await sql`revoke all on function directory.know_operations() from public`.execute(db);
	await sql`grant execute on function directory.know_operations() to tallygrove_app`.execute(db);
}
