import { type Kysely, sql } from "kysely";

// A survey's brief says why it is asked, before anybody is; what it planned to tell is later held against what was told.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.survey_brief (
		survey_id uuid primary key references collect.survey on delete cascade,
		why text not null default '' check (length(why) <= 2000),
		asked_by text not null default '' check (length(asked_by) <= 300),
		decision text not null default '' check (length(decision) <= 2000),
		planned jsonb not null default '[]',
		version integer not null default 1,
		written_by uuid not null references auth.person on delete restrict,
		written_at timestamptz not null default now()
	)`.execute(db);
	await sql`alter table collect.survey_brief enable row level security`.execute(db);
	await sql`create policy by_scope on collect.survey_brief to tallygrove_app using (auth.scope() = 'network'
		or (auth.scope() = 'desk' and exists (select from collect.survey_state s
			where s.survey_id = survey_brief.survey_id and s.state_fips = any (auth.scope_states()))))`.execute(db);
	await sql`grant select, insert, update on collect.survey_brief to tallygrove_app`.execute(db);

	await sql`alter table collect.survey
		add column copied_from uuid references collect.survey on delete set null,
		add column archived_at timestamptz,
		add column archived_by uuid references auth.person on delete restrict,
		add constraint survey_archived_whole check (num_nonnulls(archived_at, archived_by) in (0, 2)),
		add constraint survey_archived_was_opened check (archived_at is null or opened_at is not null)`.execute(db);
	await sql`create index survey_by_copied_from on collect.survey (copied_from) where copied_from is not null`.execute(
		db,
	);
}
