import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	// How far the job is that makes a draft, for the associates who wait for it, who may also stop it.
	await sql`alter table collect.release_draft
		add column progress jsonb,
		drop constraint release_draft_status_check,
		add constraint release_draft_status_check check (status in
			('queued', 'failed', 'audit_failed', 'audited', 'scheduled', 'approved', 'rejected', 'superseded', 'cancelled'))`.execute(
		db,
	);
}
