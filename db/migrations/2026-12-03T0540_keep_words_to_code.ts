import { type Kysely, sql } from "kysely";

// What growers told in words that can be given a code is kept apart, few as it is: to count it and to show a page of it, all
// submissions of a survey were opened, twice (30,000: two seconds). A row a grower's words, as the newest submission that counts
// has them, with the codes that they were given last. Triggers on submissions, responses and decisions keep it in the same
// transaction; `collect.recount_words` makes a whole survey's from nothing.
export async function up(db: Kysely<unknown>): Promise<void> {
	await nameTheQuestions(db);
	await sql`create table collect.word_told (
		response_id uuid not null references collect.response on delete cascade,
		question_key text not null,
		planting_id uuid,
		survey_id uuid not null references collect.survey on delete cascade,
		operation_id uuid not null,
		state_fips text not null,
		-- Of the frame, which is frozen.
		county_fips text not null,
		words text not null,
		-- Null where these very words have none; empty where they stay as they are.
		codes text[],
		constraint word_told_once unique nulls not distinct (response_id, question_key, planting_id)
	)`.execute(db);
	await sql`create index word_told_by_survey on collect.word_told (survey_id, state_fips)`.execute(db);
	await seenByTheDesk(db);
	await tell(db);
	await keepByTriggers(db);
	await sql`select collect.recount_words(survey_id) from collect.survey`.execute(db);
}

/** A form is large: which of its questions take words to code stands beside it, so that a submission need not open it. */
async function nameTheQuestions(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.coded_questions(definition jsonb) returns text[] language sql immutable parallel safe
		as $$ select coalesce(array_agg(q ->> 'key'), '{}') from jsonb_path_query(definition,
			'$.screens[*].questions[*] ? (@.type == "short_text" && exists(@.codes))') q $$`.execute(db);
	await sql`alter table collect.form_version add column coded_questions text[] not null
		generated always as (collect.coded_questions(definition)) stored`.execute(db);
}

/** Growers have no part in it: they read their own answers where they lie. */
async function seenByTheDesk(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.word_told enable row level security`.execute(db);
	await sql`create policy by_scope on collect.word_told for select to tallygrove_app using (
		(select auth.scope()) = 'network' or state_fips = any ((select auth.desk_states())::text[]))`.execute(db);
	await sql`create policy rehearsals_apart on collect.word_told as restrictive for select to tallygrove_app using (
		nullif(survey_id = any ((select collect.hidden_surveys())::uuid[]), true) is not null)`.execute(db);
	await sql`grant select on collect.word_told to tallygrove_app`.execute(db);
}

/** The one place that says which words of a response count, and which codes are theirs. */
async function tell(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.words_of_response(of_response uuid) returns setof collect.word_told
		language sql stable as $$
		select r.response_id, a.told ->> 'questionKey', (a.told ->> 'plantingId')::uuid, r.survey_id, r.operation_id, f.state_fips,
			f.county_fips, a.told ->> 'value',
			case when d.act = 'coded' and d.was -> 'value' = a.told -> 'value'
				then array(select jsonb_array_elements_text(d.answer -> 'codes')) end
		from collect.response r
			join collect.survey s on s.survey_id = r.survey_id
			join collect.form_version v on v.form_version_id = s.form_version_id
			join collect.frame_operation f on f.survey_id = r.survey_id and f.operation_id = r.operation_id
			cross join lateral (select b.answers from collect.submission b where b.response_id = r.response_id
				and b.withdrawn_at is null and not b.late order by b.version desc limit 1) sent
			cross join lateral jsonb_array_elements(sent.answers -> 'answers') a (told)
			left join lateral (select x.act, x.was, x.answer from collect.correction x where x.response_id = r.response_id
				and x.question_key = a.told ->> 'questionKey'
				and x.planting_id is not distinct from (a.told ->> 'plantingId')::uuid order by x.number desc limit 1) d on true
		where r.response_id = of_response and r.submitted_at is not null
			and a.told ->> 'questionKey' = any (v.coded_questions) and a.told ->> 'kind' = 'given'
		$$`.execute(db);
	await sql`create function collect.recount_words(of_survey uuid) returns void language plpgsql as $$
		begin
			delete from collect.word_told where survey_id = of_survey;
			insert into collect.word_told select w.* from collect.response r
				cross join lateral collect.words_of_response(r.response_id) w where r.survey_id = of_survey;
		end $$`.execute(db);
	await sql`revoke all on function collect.words_of_response(uuid), collect.recount_words(uuid) from public`.execute(
		db,
	);
}

/** Whatever changes a response's words holds that response's lock. */
async function keepByTriggers(db: Kysely<unknown>): Promise<void> {
	// Definer: a grower who answers sees none of it, and nobody writes one by hand.
	await sql`create function collect.tell_words() returns trigger language plpgsql security definer set search_path = '' as $$
		declare
			of_response uuid := case when tg_op = 'DELETE' then old.response_id else new.response_id end;
		begin
			delete from collect.word_told where response_id = of_response;
			insert into collect.word_told select * from collect.words_of_response(of_response);
			return null;
		end $$`.execute(db);
	await sql`create function collect.tell_words_of_survey() returns trigger language plpgsql security definer
		set search_path = '' as $$
		begin
			perform collect.recount_words(new.survey_id);
			return null;
		end $$`.execute(db);
	await sql`revoke all on function collect.tell_words(), collect.tell_words_of_survey() from public`.execute(db);
	await sql`create trigger tell_words after insert or update or delete on collect.submission
		for each row execute function collect.tell_words()`.execute(db);
	await sql`create trigger tell_words after insert or update or delete on collect.correction
		for each row execute function collect.tell_words()`.execute(db);
	await sql`create trigger tell_words after update of submitted_at on collect.response for each row
		when ((old.submitted_at is null) <> (new.submitted_at is null)) execute function collect.tell_words()`.execute(db);
	await sql`create trigger tell_words after update of form_version_id on collect.survey for each row
		when (old.form_version_id <> new.form_version_id) execute function collect.tell_words_of_survey()`.execute(db);
}
