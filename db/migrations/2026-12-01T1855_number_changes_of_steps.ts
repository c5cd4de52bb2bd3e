import { type Kysely, sql } from "kysely";

// Two devices can have the same step of a response open. Each step's newest change has a number and the name its sender gave
// it, so that what was typed upon an older one is not written over it, and a repeated one is known for what it is.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.response add column step_changes jsonb not null default '{}'
		constraint response_step_changes_object check (jsonb_typeof(step_changes) = 'object')`.execute(db);
}
