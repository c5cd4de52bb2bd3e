import { type Kysely, sql } from "kysely";

// A rehearsal of a survey asks invented operations. It and they are seen by a transaction that names it and by no other:
// lists, frames, mails, jobs and figures work as if it were not there, without having to know that there are rehearsals.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.survey
		add column rehearsal_of uuid references collect.survey on delete restrict,
		add constraint survey_rehearsal_of_another check (rehearsal_of <> survey_id)`.execute(db);
	await sql`create unique index survey_one_rehearsal on collect.survey (rehearsal_of) where rehearsal_of is not null`.execute(
		db,
	);
	// An invented operation has no address, so that nothing could be mailed to it.
	await sql`alter table directory.operation
		add column rehearsal_id uuid references collect.survey on delete restrict,
		add constraint operation_rehearsing_has_no_address check (rehearsal_id is null or email is null)`.execute(db);
	await sql`create index operation_by_rehearsal on directory.operation (rehearsal_id) where rehearsal_id is not null`.execute(
		db,
	);
	await hide(db);
	await keepApart(db);
	await throwAway(db);
}

async function hide(db: Kysely<unknown>): Promise<void> {
	// The survey that a transaction names as the one it works on, set beside its scope.
	await sql`create function auth.scope_survey() returns uuid language sql stable
		as $$ select nullif(current_setting('tallygrove.survey', true), '')::uuid $$`.execute(db);
	// Definer, since the asker cannot see what is hidden from it.
	await sql`create function collect.hidden_surveys() returns uuid[] language sql stable security definer
		set search_path = '' as $$ select coalesce(array_agg(survey_id), '{}') from collect.survey
			where rehearsal_of is not null and survey_id is distinct from auth.scope_survey() $$`.execute(db);
	await sql`create function collect.rehearsal_of(of_survey uuid) returns uuid language sql stable security definer
		set search_path = '' as $$ select survey_id from collect.survey where rehearsal_of = of_survey $$`.execute(db);
	await sql`grant execute on function auth.scope_survey(), collect.hidden_surveys(), collect.rehearsal_of(uuid)
		to tallygrove_app`.execute(db);

	await sql`alter table collect.survey enable row level security`.execute(db);
	await sql`create policy everyone on collect.survey to tallygrove_app using (true)`.execute(db);
	await sql`create policy rehearsals_apart on collect.survey as restrictive to tallygrove_app
		using (rehearsal_of is null or survey_id = auth.scope_survey())`.execute(db);
	await sql`create policy rehearsals_apart on directory.operation as restrictive to tallygrove_app
		using (rehearsal_id is null or rehearsal_id = auth.scope_survey())`.execute(db);
	// The list is asked for once a statement and is empty nearly always.
	for (const table of ["frame_operation", "frame_crop", "mailing", "response", "fact", "contact"]) {
		const also = sql.raw(table === "contact" ? "survey_id is null or" : "");
		await sql`create policy rehearsals_apart on ${sql.id("collect", table)} as restrictive to tallygrove_app
			using (${also} survey_id <> all ((select collect.hidden_surveys())::uuid[]))`.execute(db);
	}
}

// These hold for every role, also for the owner.
async function keepApart(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.refuse_rehearsal() returns trigger language plpgsql security definer
		set search_path = '' as $$ begin
			if exists (select from collect.survey s where s.survey_id = new.survey_id and s.rehearsal_of is not null) then
				raise exception 'a rehearsal has no %', tg_table_name using errcode = 'check_violation',
					constraint = tg_table_name || '_of_no_rehearsal';
			end if;
			return new;
		end $$`.execute(db);
	for (const table of ["release_draft", "mailing", "reminder"]) {
		await sql`create trigger of_no_rehearsal before insert or update of survey_id on ${sql.id("collect", table)}
			for each row execute function collect.refuse_rehearsal()`.execute(db);
	}
	await sql`create function collect.refuse_mixed_frame() returns trigger language plpgsql security definer
		set search_path = '' as $$ begin
			if exists (select from added f join collect.survey s on s.survey_id = f.survey_id
				join directory.operation o on o.operation_id = f.operation_id
				where o.rehearsal_id is distinct from case when s.rehearsal_of is not null then s.survey_id end) then
				raise exception 'a frame holds the operations of a rehearsal or none of them'
					using errcode = 'check_violation', constraint = 'frame_of_one_kind';
			end if;
			return null;
		end $$`.execute(db);
	for (const event of ["insert", "update"]) {
		await sql`create trigger ${sql.id(`of_one_kind_${event}`)} after ${sql.raw(event)} on collect.frame_operation
			referencing new table as added for each statement execute function collect.refuse_mixed_frame()`.execute(db);
	}
	await sql`create function collect.refuse_change_of_kind() returns trigger language plpgsql as $$ begin
			raise exception 'a rehearsal stays one, and nothing becomes one' using errcode = 'check_violation',
				constraint = 'kind_for_good';
		end $$`.execute(db);
	await sql`create trigger kind_for_good before update of rehearsal_of on collect.survey for each row
		when (old.rehearsal_of is distinct from new.rehearsal_of) execute function collect.refuse_change_of_kind()`.execute(db);
	await sql`create trigger kind_for_good before update of rehearsal_id on directory.operation for each row
		when (old.rehearsal_id is distinct from new.rehearsal_id) execute function collect.refuse_change_of_kind()`.execute(db);
}

/** What was rehearsed leaves nothing behind: nothing rests on it. Only a desk that holds all its states may. */
async function throwAway(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.discard_rehearsal(rehearsal uuid) returns void language plpgsql security definer
		set search_path = '' as $$
		declare owners uuid[];
		begin
			if not exists (select from collect.survey s where s.survey_id = rehearsal and s.rehearsal_of is not null)
				or auth.scope() <> 'desk' or exists (select from collect.survey_state g
					where g.survey_id = rehearsal and g.state_fips <> all (auth.scope_states())) then
				raise exception 'no rehearsal to throw away' using errcode = 'check_violation';
			end if;
			delete from collect.edit_question q using collect.edit_finding f, collect.response r
				where q.edit_finding_id = f.edit_finding_id and f.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.edit_finding_step t using collect.edit_finding f, collect.response r
				where t.edit_finding_id = f.edit_finding_id and f.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.correction c using collect.response r
				where c.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.edit_finding f using collect.response r
				where f.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.photo p using collect.response r where p.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.answer a using collect.response r where a.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.late_decision l using collect.response r
				where l.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.submission u using collect.response r
				where u.response_id = r.response_id and r.survey_id = rehearsal;
			delete from collect.fact where survey_id = rehearsal;
			delete from collect.tally where survey_id = rehearsal;
			delete from collect.entry_draft where survey_id = rehearsal;
			delete from collect.contact c using directory.operation o
				where c.operation_id = o.operation_id and o.rehearsal_id = rehearsal;
			delete from collect.response where survey_id = rehearsal;
			delete from collect.personal_link where survey_id = rehearsal;
			delete from collect.frame_crop where survey_id = rehearsal;
			delete from collect.frame_operation where survey_id = rehearsal;
			select array_agg(owner_id) into owners from directory.operation where rehearsal_id = rehearsal;
			delete from directory.operation where rehearsal_id = rehearsal;
			delete from directory.owner where owner_id = any (owners);
			delete from collect.survey where survey_id = rehearsal;
		end $$`.execute(db);
	await sql`revoke execute on function collect.discard_rehearsal(uuid) from public`.execute(db);
	await sql`grant execute on function collect.discard_rehearsal(uuid) to tallygrove_app`.execute(db);
}
