import { type Kysely, sql } from "kysely";

// A survey's reminders stand here with their times; a queued job only rings the bell. A mailing says when it was handed
// to the mail server before that happens, so that a process that dies meanwhile leads to no second mail. An address that
// took no mail is marked where the address is, and gets none of any survey until it is mended.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.reminder (
		survey_id uuid not null references collect.survey on delete cascade,
		wave integer not null check (wave in (1, 2)),
		remind_at timestamptz not null,
		set_by uuid references auth.person on delete restrict,
		set_at timestamptz not null default now(),
		sent_at timestamptz,
		cancelled_at timestamptz,
		constraint reminder_ends_once check (num_nonnulls(sent_at, cancelled_at) <= 1),
		primary key (survey_id, wave)
	)`.execute(db);
	await sql`grant select, insert, update on collect.reminder to tallygrove_app`.execute(db);
	await sql`alter table collect.mailing
		add column tried_at timestamptz,
		drop constraint mailing_kind_check,
		add constraint mailing_kind_check check (kind in ('invitation', 'reminder', 'receipt', 'thank_you'))`.execute(db);
	await sql`alter table directory.operation add column mail_returned_at timestamptz`.execute(db);
}
