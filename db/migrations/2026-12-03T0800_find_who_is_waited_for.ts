import { type Kysely, sql } from "kysely";

// Who is still waited for is found county by county, so that a page of paper forms or calls reads its own growers alone.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create index frame_operation_waited on collect.frame_operation (survey_id, county_fips, stratum_key)
		where disposition in ('not_reached', 'undeliverable', 'reached', 'partial')`.execute(db);
}
