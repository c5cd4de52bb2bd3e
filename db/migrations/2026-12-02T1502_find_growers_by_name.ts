import { type Kysely, sql } from "kysely";

// A page of growers by name or by place is read off an index, in whichever of an associate's states, and not sorted out of all
// of them; how many have sent answers in is counted without looking at the rest of their responses.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create index operation_by_name on directory.operation (name, operation_id)`.execute(db);
	await sql`create index operation_by_county on directory.operation (county_fips, name, operation_id)`.execute(db);
	await sql`create index response_sent_in on collect.response (survey_id, state_fips) include (operation_id)
		where submitted_at is not null`.execute(db);
}
