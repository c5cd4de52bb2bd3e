import { type Kysely, sql } from "kysely";

// A survey's figures can be told again: a revision replaces an edition and says why, an approved draft waits for the minute
// that was set, and a release that should not have been is withdrawn and leaves its address behind.
export async function up(db: Kysely<unknown>): Promise<void> {
	await numberEditions(db);
	await createWithdrawal(db);
	await letDraftsWait(db);
	await gateByApproval(db);
}

/** A survey's releases form a series; each but the first replaces the one before it, and no two replace the same one. */
async function numberEditions(db: Kysely<unknown>): Promise<void> {
	await sql`alter table release.release
		add column series_id uuid,
		add column edition integer not null default 1,
		add column revises uuid unique references release.release on delete restrict,
		add column revision_reason jsonb,
		add constraint release_revision_whole check (
			(edition = 1) = (revises is null) and num_nonnulls(revises, revision_reason) in (0, 2))`.execute(db);
	// What is published is frozen, for the owner too: only this once a column is filled that was not there.
	await sql`alter table release.release disable trigger frozen`.execute(db);
	await sql`update release.release r set series_id = d.survey_id
		from collect.release_draft d where d.release_draft_id = r.release_id`.execute(db);
	await sql`alter table release.release enable trigger frozen`.execute(db);
	await sql`alter table release.release alter column series_id set not null,
		add constraint release_edition unique (series_id, edition)`.execute(db);
}

/** The figures of a withdrawn release are kept and served to nobody: the reader's role cannot see them any more. */
async function createWithdrawal(db: Kysely<unknown>): Promise<void> {
	await sql`create table release.withdrawal (
		release_id uuid primary key references release.release on delete restrict,
		reason jsonb not null,
		withdrawn_at timestamptz not null default now()
	)`.execute(db);
	await sql`create trigger frozen before update or delete or truncate on release.withdrawal
		for each statement execute function release.refuse_change()`.execute(db);
	await sql`grant select on release.withdrawal to tallygrove_reader`.execute(db);
	await sql`grant select, insert on release.withdrawal to tallygrove_app`.execute(db);
	for (const table of ["cell", "figure"]) {
		const name = sql.id("release", table);
		await sql`alter table ${name} enable row level security`.execute(db);
		await sql`create policy standing on ${name} for select to tallygrove_reader
			using (release_id not in (select w.release_id from release.withdrawal w))`.execute(db);
		await sql`create policy desk_and_jobs on ${name} to tallygrove_app using (true) with check (true)`.execute(db);
	}
}

async function letDraftsWait(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.release_draft
		add column revises uuid references release.release on delete restrict,
		add column revision_reason jsonb,
		-- When an approved draft is to be published; until then it is scheduled.
		add column publish_at timestamptz,
		drop constraint release_draft_status_check,
		add constraint release_draft_status_check check (status in
			('queued', 'failed', 'audit_failed', 'audited', 'scheduled', 'approved', 'rejected', 'superseded')),
		drop constraint release_draft_approved_audited,
		drop constraint release_draft_audited_passed,
		add constraint release_draft_audited_passed check (
			status not in ('audited', 'scheduled', 'approved') or coalesce((audit ->> 'passed')::boolean, false)),
		add constraint release_draft_scheduled_whole check (
			status <> 'scheduled' or num_nonnulls(publish_at, decided_by, decided_at) = 3),
		add constraint release_draft_revision_whole check (num_nonnulls(revises, revision_reason) in (0, 2))`.execute(db);
	// A survey has as many published drafts as editions; that each replaces the one before it, the releases say.
	await sql`drop index collect.release_draft_one_approved`.execute(db);
	// One decision at a time: of several drafts of a survey at most one is on its way.
	await sql`create unique index release_draft_under_way on collect.release_draft (survey_id)
		where status in ('queued', 'audited', 'scheduled')`.execute(db);
}

/** A release copies a draft that passed its audit, that a second person approved, and whose minute has come. */
async function gateByApproval(db: Kysely<unknown>): Promise<void> {
	await sql`create or replace function release.refuse_unaudited() returns trigger language plpgsql
		set search_path = '' as $$
		begin
			if not exists (select from collect.release_draft d where d.release_draft_id = new.release_id
				and d.status = 'scheduled' and (d.audit ->> 'passed')::boolean and d.checksum = new.checksum
				and d.publish_at <= clock_timestamp() and d.survey_id = new.series_id
				and d.revises is not distinct from new.revises) then
				raise exception 'release_not_audited' using errcode = 'check_violation';
			end if;
			return new;
		end $$`.execute(db);
}
