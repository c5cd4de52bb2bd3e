import { type Kysely, sql } from "kysely";

// A printed report tells its release's figures: where these were withdrawn, the reader's role sees neither, whoever asks.
export async function up(db: Kysely<unknown>): Promise<void> {
	for (const table of ["report_file", "report_photo"]) {
		await sql`create policy standing on ${sql.id("publish", table)} as restrictive for select to tallygrove_reader
			using (not exists (select from publish.report r join release.withdrawal w using (release_id)
				where r.report_id = ${sql.ref(`${table}.report_id`)}))`.execute(db);
	}
}
