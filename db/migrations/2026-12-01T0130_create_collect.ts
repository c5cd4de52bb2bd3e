import { type Kysely, sql } from "kysely";

export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.form (
		form_id uuid primary key default gen_random_uuid(),
		form_key text not null unique check (form_key ~ '^[a-z_]+$'),
		created_at timestamptz not null default now()
	)`.execute(db);
	await sql`create table collect.form_version (
		form_version_id uuid primary key default gen_random_uuid(),
		form_id uuid not null references collect.form on delete restrict,
		version integer not null check (version >= 1),
		definition jsonb not null,
		created_at timestamptz not null default now(),
		constraint form_version_once unique (form_id, version)
	)`.execute(db);

	await sql`create table collect.survey (
		survey_id uuid primary key default gen_random_uuid(),
		form_version_id uuid not null references collect.form_version on delete restrict,
		season integer not null check (season between 2000 and 2100),
		title jsonb not null,
		crop_keys text[] not null check (cardinality(crop_keys) > 0),
		closes_at timestamptz not null,
		created_by uuid references auth.person on delete restrict,
		created_at timestamptz not null default now(),
		opened_at timestamptz,
		closed_at timestamptz,
		constraint survey_closes_after_opening check (closed_at is null or opened_at is not null)
	)`.execute(db);
	await sql`create table collect.survey_state (
		survey_id uuid not null references collect.survey on delete cascade,
		state_fips text not null references directory.state on delete restrict,
		primary key (survey_id, state_fips)
	)`.execute(db);

	// The frame is frozen at opening: later changes in the directory do not move an operation between strata.
	await sql`create table collect.frame_operation (
		survey_id uuid not null references collect.survey on delete restrict,
		operation_id uuid not null references directory.operation on delete restrict,
		owner_id uuid not null,
		county_fips text not null references directory.county on delete restrict,
		state_fips text not null,
		size_class text not null check (size_class in ('small', 'medium', 'large')),
		stratum_key text not null,
		disposition text not null default 'not_reached' check (disposition in
			('complete', 'partial', 'refused', 'not_reached', 'undeliverable', 'not_eligible')),
		disposition_at timestamptz not null default now(),
		primary key (survey_id, operation_id)
	)`.execute(db);
	await sql`create index frame_operation_by_state on collect.frame_operation (survey_id, state_fips, county_fips)`.execute(
		db,
	);
	await sql`create table collect.frame_crop (
		survey_id uuid not null,
		operation_id uuid not null,
		crop_key text not null references directory.crop on delete restrict,
		bearing_trees integer not null,
		primary key (survey_id, operation_id, crop_key),
		foreign key (survey_id, operation_id) references collect.frame_operation on delete restrict
	)`.execute(db);

	await sql`create table collect.mailing (
		mailing_id uuid primary key default gen_random_uuid(),
		survey_id uuid not null,
		operation_id uuid not null,
		kind text not null check (kind in ('invitation', 'reminder', 'receipt')),
		wave integer not null default 1,
		queued_by uuid references auth.person on delete restrict,
		queued_at timestamptz not null default now(),
		sent_at timestamptz,
		failed_at timestamptz,
		failure text,
		message_id text,
		constraint mailing_once unique (survey_id, operation_id, kind, wave),
		foreign key (survey_id, operation_id) references collect.frame_operation on delete restrict
	)`.execute(db);

	await sql`create table collect.personal_link (
		personal_link_id uuid primary key default gen_random_uuid(),
		survey_id uuid not null,
		operation_id uuid not null,
		mailing_id uuid references collect.mailing on delete restrict,
		token_hash text not null unique,
		created_at timestamptz not null default now(),
		expires_at timestamptz not null,
		replaced_at timestamptz,
		first_opened_at timestamptz,
		foreign key (survey_id, operation_id) references collect.frame_operation on delete restrict
	)`.execute(db);
	await sql`create index personal_link_by_operation on collect.personal_link (survey_id, operation_id)`.execute(db);
	await sql`alter table auth.session add constraint session_link foreign key (personal_link_id)
		references collect.personal_link on delete cascade`.execute(db);

	await sql`create table collect.response (
		response_id uuid primary key default gen_random_uuid(),
		survey_id uuid not null,
		operation_id uuid not null,
		state_fips text not null,
		language text not null check (language in ('en', 'es')),
		mode text not null default 'web' check (mode in ('web', 'telephone', 'paper')),
		pledge_version text not null,
		pledged_at timestamptz not null default now(),
		draft_version integer not null default 0,
		submitted_version integer not null default 0,
		receipt_code text unique,
		started_at timestamptz not null default now(),
		first_submitted_at timestamptz,
		submitted_at timestamptz,
		constraint response_once unique (survey_id, operation_id),
		constraint response_submitted_whole check (num_nonnulls(receipt_code, first_submitted_at, submitted_at) in (0, 3)),
		foreign key (survey_id, operation_id) references collect.frame_operation on delete restrict
	)`.execute(db);

	// A value, "don't know", a refusal and "not asked" (no row) are four different answers; zero is a value.
	await sql`create table collect.answer (
		answer_id uuid primary key default gen_random_uuid(),
		response_id uuid not null references collect.response on delete cascade,
		question_key text not null,
		planting_id uuid references directory.planting on delete restrict,
		kind text not null check (kind in ('given', 'dont_know', 'refused')),
		value jsonb,
		given jsonb,
		answered_at timestamptz not null default now(),
		constraint answer_once unique nulls not distinct (response_id, question_key, planting_id),
		constraint answer_value_when_given check ((kind = 'given') = (value is not null))
	)`.execute(db);

	await sql`create table collect.submission (
		response_id uuid not null references collect.response on delete restrict,
		version integer not null check (version >= 1),
		submitted_at timestamptz not null default now(),
		answers jsonb not null,
		primary key (response_id, version)
	)`.execute(db);

	await sql`create table collect.fact (
		survey_id uuid not null,
		measure_key text not null,
		crop_key text not null,
		operation_id uuid not null,
		owner_id uuid not null,
		county_fips text not null,
		state_fips text not null,
		stratum_key text not null,
		y double precision not null,
		x double precision not null,
		set_aside boolean not null default false,
		primary key (survey_id, measure_key, crop_key, operation_id)
	)`.execute(db);

	// A release is drafted, audited and approved here; only what may be shown is then copied to schema release.
	await sql`create table collect.release_draft (
		release_draft_id uuid primary key default gen_random_uuid(),
		survey_id uuid not null references collect.survey on delete restrict,
		status text not null default 'queued' check (status in ('queued', 'failed', 'audit_failed', 'audited', 'approved', 'rejected', 'superseded')),
		rules jsonb not null,
		method jsonb,
		audit jsonb,
		checksum text,
		drafted_by uuid not null references auth.person on delete restrict,
		drafted_at timestamptz not null default now(),
		computed_at timestamptz,
		decided_by uuid references auth.person on delete restrict,
		decided_at timestamptz,
		decision_note text,
		release_id uuid,
		constraint release_draft_second_person check (decided_by <> drafted_by),
		constraint release_draft_approved_audited check (status <> 'approved' or (audit ->> 'passed')::boolean)
	)`.execute(db);
	await sql`create unique index release_draft_one_approved on collect.release_draft (survey_id) where status = 'approved'`.execute(
		db,
	);
	await sql`create table collect.release_draft_cell (
		release_draft_id uuid not null references collect.release_draft on delete cascade,
		crop_key text not null,
		area_key text not null,
		status text not null check (status in ('shown', 'withheld', 'no_growers')),
		-- Only the desk sees which: 'own' and 'shield' become one word once published.
		reasons text[] not null default '{}',
		-- Counts and figures of shown cells only: a draft covers states that its reader may not see answers of.
		respondents integer,
		figures jsonb,
		constraint release_draft_cell_hides check ((status = 'shown') = (num_nonnulls(respondents, figures) = 2) and
			(status = 'shown' or num_nonnulls(respondents, figures) = 0)),
		primary key (release_draft_id, crop_key, area_key)
	)`.execute(db);

	await collectRights(db);
}

async function collectRights(db: Kysely<unknown>): Promise<void> {
	const byState = ["frame_operation", "response", "fact"];
	const byOperation = ["frame_crop", "mailing", "personal_link"];
	for (const table of [...byState, ...byOperation, "answer", "submission", "release_draft", "release_draft_cell"]) {
		await sql`alter table ${sql.id("collect", table)} enable row level security`.execute(db);
	}
	for (const table of byState) {
		await sql`create policy by_scope on ${sql.id("collect", table)} to tallygrove_app using (
			auth.scope() = 'network'
			or (auth.scope() = 'desk' and state_fips = any (auth.scope_states()))
			or (auth.scope() = 'grower' and operation_id = any (auth.scope_operations())))`.execute(db);
	}
	for (const table of byOperation) {
		const name = sql.id("collect", table);
		await sql`create policy by_scope on ${name} to tallygrove_app using (
			auth.scope() = 'network'
			or (auth.scope() = 'grower' and operation_id = any (auth.scope_operations()))
			or exists (select from collect.frame_operation f
				where f.survey_id = ${sql.id(table)}.survey_id and f.operation_id = ${sql.id(table)}.operation_id))`.execute(db);
	}
	for (const table of ["answer", "submission"]) {
		await sql`create policy by_scope on ${sql.id("collect", table)} to tallygrove_app using (exists (
			select from collect.response r where r.response_id = ${sql.id(table)}.response_id))`.execute(db);
	}
	// Drafted figures cover the network; associates and coordinators work on them, growers never see them.
	for (const table of ["release_draft", "release_draft_cell"]) {
		await sql`create policy by_scope on ${sql.id("collect", table)} to tallygrove_app
			using (auth.scope() in ('network', 'desk'))`.execute(db);
	}
	await sql`grant select, insert, update on collect.form, collect.form_version, collect.survey, collect.survey_state,
		collect.frame_operation, collect.frame_crop, collect.mailing, collect.personal_link, collect.response, collect.answer,
		collect.fact, collect.release_draft, collect.release_draft_cell to tallygrove_app`.execute(db);
	await sql`grant select, insert on collect.submission to tallygrove_app`.execute(db);
	await sql`grant delete on collect.answer, collect.fact to tallygrove_app`.execute(db);
}
