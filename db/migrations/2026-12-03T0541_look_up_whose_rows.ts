import { type Kysely, sql } from "kysely";

// Whose a finding or a contact is, is looked up by its key for the rows that are read: taken for many, all responses of all
// seasons were gathered to tell 2,000 findings apart (65,000 responses: 160 ms, twice a page). `offset 0` says the same and
// leaves the planner no other way. Growers by county, and calls promised for a day, are read off an index.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter policy by_scope on collect.edit_finding using (exists (
		select from collect.response r where r.response_id = edit_finding.response_id offset 0))`.execute(db);
	await sql`alter policy by_scope on collect.contact using (exists (
		select from directory.operation o where o.operation_id = contact.operation_id offset 0))`.execute(db);
	await sql`create index county_by_name on directory.county (name, county_fips)`.execute(db);
	await sql`create index contact_promised on collect.contact (next_on) where next_on is not null`.execute(db);
}
