import { type Kysely, sql } from "kysely";

// A finding keeps whose answers it is about, of which survey, and whether they still count: the queue and the desk's first page
// looked each of them up among all responses, to count the open ones and to show fifty (2,000 of 30,000 responses: 150 ms).
// Triggers copy it from the response and follow it; who sees which finding is as it was.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.edit_finding
		add column survey_id uuid references collect.survey on delete restrict,
		add column operation_id uuid references directory.operation on delete restrict,
		add column state_fips text,
		-- False once their grower took the answers back.
		add column is_sent boolean`.execute(db);
	await sql`update collect.edit_finding f set survey_id = r.survey_id, operation_id = r.operation_id,
			state_fips = r.state_fips, is_sent = r.submitted_at is not null
		from collect.response r where r.response_id = f.response_id`.execute(db);
	// Defaults for who inserts; the trigger has the last word.
	await sql`alter table collect.edit_finding
		alter column survey_id set default '00000000-0000-0000-0000-000000000000', alter column survey_id set not null,
		alter column operation_id set default '00000000-0000-0000-0000-000000000000', alter column operation_id set not null,
		alter column state_fips set default '', alter column state_fips set not null,
		alter column is_sent set default false, alter column is_sent set not null`.execute(db);
	await sql`create index edit_finding_open on collect.edit_finding (survey_id, state_fips) include (operation_id)
		where outcome is null and is_sent`.execute(db);
	await followResponses(db);
	await sql`alter policy by_scope on collect.edit_finding using ((select auth.scope()) = 'network'
		or state_fips = any ((select auth.desk_states())::text[])
		or operation_id = any ((select auth.grower_operations())::uuid[]))`.execute(db);
	await sql`create policy rehearsals_apart on collect.edit_finding as restrictive to tallygrove_app using (
		nullif(survey_id = any ((select collect.hidden_surveys())::uuid[]), true) is not null)`.execute(db);
}

async function followResponses(db: Kysely<unknown>): Promise<void> {
	// With the asker's own rights: of a response that is not theirs to see there is nothing to copy, and no finding is made.
	await sql`create function collect.take_from_response() returns trigger language plpgsql set search_path = '' as $$
		begin
			select r.survey_id, r.operation_id, r.state_fips, r.submitted_at is not null
				into new.survey_id, new.operation_id, new.state_fips, new.is_sent
			from collect.response r where r.response_id = new.response_id;
			return new;
		end $$`.execute(db);
	await sql`create trigger take_from_response before insert or update of response_id, survey_id, operation_id, state_fips, is_sent
		on collect.edit_finding for each row execute function collect.take_from_response()`.execute(db);
	// Definer: a grower may take answers back without a right to write findings.
	await sql`create function collect.tell_findings() returns trigger language plpgsql security definer
		set search_path = '' as $$
		begin
			update collect.edit_finding set is_sent = is_sent where response_id = new.response_id;
			return null;
		end $$`.execute(db);
	await sql`revoke all on function collect.tell_findings() from public`.execute(db);
	await sql`create trigger tell_findings after update of survey_id, operation_id, state_fips, submitted_at on collect.response
		for each row when ((old.survey_id, old.operation_id, old.state_fips, old.submitted_at is null)
			is distinct from (new.survey_id, new.operation_id, new.state_fips, new.submitted_at is null))
		execute function collect.tell_findings()`.execute(db);
}
