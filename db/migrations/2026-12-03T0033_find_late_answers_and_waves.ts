import { type Kysely, sql } from "kysely";

// The few late answers, and the last wave of a survey's mails, are found without going through all submissions (60,000: 140 ms)
// and all mailings (60,000: 55 ms).
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create index submission_late on collect.submission (response_id) where late and withdrawn_at is null`.execute(
		db,
	);
	await sql`create index mailing_by_wave on collect.mailing (survey_id, kind, wave)`.execute(db);
}
