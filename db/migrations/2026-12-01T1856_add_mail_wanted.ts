import { type Kysely, sql } from "kysely";

// A grower can refuse invitations and reminders and still answer after signing in. Receipts are no invitation.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table directory.operation add column mail_wanted boolean not null default true`.execute(db);
}
