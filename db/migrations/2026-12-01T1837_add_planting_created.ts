import { type Kysely, sql } from "kysely";

// Growers write their plantings down themselves. A survey asks about what stood when it opened, so the list must know since
// when a planting has been in it; those that are there already have been for long enough.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table directory.planting add column created_at timestamptz not null default '-infinity'`.execute(db);
	await sql`alter table directory.planting alter column created_at set default now()`.execute(db);
}
