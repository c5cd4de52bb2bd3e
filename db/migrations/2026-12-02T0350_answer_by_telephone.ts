import { type Kysely, sql } from "kysely";

// Answers that an associate takes by telephone or from paper, what calls come to, and what becomes of late answers.
export async function up(db: Kysely<unknown>): Promise<void> {
	// Somebody who was spoken to is known to belong to the survey: not the same as one whom nobody reached.
	await sql`alter table collect.frame_operation
		drop constraint frame_operation_disposition_check,
		add constraint frame_operation_disposition_check check (disposition in
			('complete', 'partial', 'refused', 'reached', 'not_reached', 'undeliverable', 'not_eligible'))`.execute(db);
	await extendContact(db);

	// Each version says how it came, since a grower may amend on the web what was told by telephone.
	await sql`alter table collect.submission
		add column mode text not null default 'web' check (mode in ('web', 'telephone', 'paper')),
		add column entered_by uuid references auth.person on delete restrict,
		add constraint submission_entered_whole check ((mode = 'web') = (entered_by is null))`.execute(db);
	await createEntryDraft(db);
	await createLateDecision(db);
}

async function extendContact(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.contact
		add column next_time time,
		add constraint contact_time_of_a_day check (next_time is null or next_on is not null),
		drop constraint contact_outcome_check,
		add constraint contact_outcome_check check (outcome in
			('reached', 'no_answer', 'message_left', 'call_back', 'refused', 'not_eligible', 'wrong_number'))`.execute(db);
	await sql`create index contact_due on collect.contact (next_on) where next_on is not null`.execute(db);
}

/** What an associate has typed of one operation's answers and not sent in, box by box, as it was typed. */
async function createEntryDraft(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.entry_draft (
		survey_id uuid not null,
		operation_id uuid not null,
		person_id uuid not null references auth.person on delete cascade,
		mode text not null check (mode in ('telephone', 'paper')),
		typed jsonb not null check (jsonb_typeof(typed) = 'object'),
		started_at timestamptz not null default now(),
		saved_at timestamptz not null default now(),
		primary key (survey_id, operation_id, person_id),
		foreign key (survey_id, operation_id) references collect.frame_operation on delete restrict
	)`.execute(db);
	await sql`alter table collect.entry_draft enable row level security`.execute(db);
	// The frame has its own policy. A grower's scope reaches the row too, since it goes when the grower leaves.
	await sql`create policy by_scope on collect.entry_draft to tallygrove_app using (exists (
		select from collect.frame_operation f
		where f.survey_id = entry_draft.survey_id and f.operation_id = entry_draft.operation_id))`.execute(db);
	await sql`grant select, insert, update, delete on collect.entry_draft to tallygrove_app`.execute(db);
}

/** Whether what came after the closing counts. Said once of each version; a newer version waits anew. */
async function createLateDecision(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.late_decision (
		response_id uuid not null,
		version integer not null,
		taken boolean not null,
		reason text not null check (length(reason) <= 2000),
		decided_by uuid not null references auth.person on delete restrict,
		decided_at timestamptz not null default now(),
		primary key (response_id, version),
		foreign key (response_id, version) references collect.submission on delete restrict
	)`.execute(db);
	await sql`alter table collect.late_decision enable row level security`.execute(db);
	await sql`create policy by_scope on collect.late_decision to tallygrove_app using (exists (
		select from collect.response r where r.response_id = late_decision.response_id))`.execute(db);
	await sql`create policy the_desk_decides on collect.late_decision as restrictive for insert to tallygrove_app
		with check (auth.scope() in ('desk', 'network'))`.execute(db);
	// The reason goes when its grower leaves.
	await sql`grant select, insert, update (reason) on collect.late_decision to tallygrove_app`.execute(db);
}
