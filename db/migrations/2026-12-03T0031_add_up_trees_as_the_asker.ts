import { type Kysely, sql } from "kysely";

// Whoever may write a planting may write its operation, so adding up its trees needs no rights but theirs: one function fewer
// that stands above the rows' guards.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter function directory.add_up_trees() security invoker`.execute(db);
}
