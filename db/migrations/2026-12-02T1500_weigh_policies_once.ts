import { type Kysely, sql } from "kysely";

// What the policies ask of the transaction is asked once a statement and not once a row, and in words whose weight the planner
// can tell. It took `survey_id <> all (...)` of two surveys for a row in a thousand and `auth.scope() = 'desk'` for one in two
// hundred, so a frame of 50,000 operations for a single one, and went through a whole table again for each of its rows: the
// calls to make took minutes. Who sees what is as it was. Those of facts stay: facts are read a county and stratum at a time, where
// the old ones lead the planner; told that nearly every row is seen, it read a whole survey's in the order of their key.
// (PostgreSQL 15, processor time of a corrected submission among 270 neighbors: 22 ms as before, 140 ms.)
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create function auth.desk_states() returns text[] language sql stable parallel safe
		as $$ select case when auth.scope() = 'desk' then auth.scope_states() else '{}' end $$`.execute(db);
	await sql`create function auth.grower_operations() returns uuid[] language sql stable parallel safe
		as $$ select case when auth.scope() = 'grower' then auth.scope_operations() else '{}' end $$`.execute(db);
	await sql`grant execute on function auth.desk_states(), auth.grower_operations() to tallygrove_app`.execute(db);
	await byState(db);
	await byOperation(db);
	await rehearsalsApart(db);
}

const isNetwork = sql`(select auth.scope()) = 'network'`;
const ofTheDesk = sql`state_fips = any ((select auth.desk_states())::text[])`;
const ofTheGrower = sql`operation_id = any ((select auth.grower_operations())::uuid[])`;

async function byState(db: Kysely<unknown>): Promise<void> {
	for (const table of ["collect.frame_operation", "collect.response", "directory.operation"])
		await sql`alter policy by_scope on ${sql.table(table)}
			using (${isNetwork} or ${ofTheDesk} or ${ofTheGrower})`.execute(db);
	await sql`alter policy by_network on collect.tally using (${isNetwork})`.execute(db);
	await sql`alter policy desk_reads on collect.tally using (${ofTheDesk})`.execute(db);
}

async function byOperation(db: Kysely<unknown>): Promise<void> {
	for (const name of ["frame_crop", "mailing", "personal_link"]) {
		const table = sql.id(name);
		await sql`alter policy by_scope on collect.${table} using (${isNetwork} or ${ofTheGrower}
			or exists (select from collect.frame_operation f
				where f.survey_id = ${table}.survey_id and f.operation_id = ${table}.operation_id))`.execute(db);
	}
	await sql`alter policy by_scope on directory.owner using (${isNetwork}
		or exists (select from directory.operation o where o.owner_id = owner.owner_id))`.execute(db);
}

async function rehearsalsApart(db: Kysely<unknown>): Promise<void> {
	// Says the same as "is none of the hidden ones", in the one form that is taken for true of nearly every row.
	const isShown = sql`nullif(survey_id = any ((select collect.hidden_surveys())::uuid[]), true) is not null`;
	for (const table of ["frame_operation", "frame_crop", "mailing", "response"])
		await sql`alter policy rehearsals_apart on ${sql.id("collect", table)} using (${isShown})`.execute(db);
	await sql`alter policy rehearsals_apart on collect.contact using (survey_id is null or ${isShown})`.execute(db);
	await sql`alter policy rehearsals_apart on directory.operation
		using (rehearsal_id is null or rehearsal_id = (select auth.scope_survey()))`.execute(db);
}
