import { type Kysely, type RawBuilder, sql } from "kysely";

// How many have answered, where and on which day of the survey, is counted once and then kept, as `collect.frame_count` is: the
// desk's first page and that of who has answered went through all responses and their trees (30,000 responses: 300 ms a
// season). One row a county, stratum, crop (`all`: of all crops together, each operation once) and day since the opening, for
// answers that were sent in and not taken back. Triggers on responses keep it in the same transaction, under the lock that
// tallies take too; `collect.recount_answers` makes a whole survey's from nothing.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.answered_count (
		survey_id uuid not null references collect.survey on delete cascade,
		crop_key text not null,
		state_fips text not null,
		county_fips text not null,
		stratum_key text not null,
		-- 0 is the first 24 hours.
		day integer not null,
		-- Both 0 where nobody is left.
		operations integer not null,
		bearing_trees bigint not null,
		primary key (survey_id, crop_key, state_fips, county_fips, stratum_key, day)
	)`.execute(db);
	await seenLikeTheFrame(db);
	await keepByTriggers(db);
	await recount(db);
	await sql`select collect.recount_answers(survey_id) from collect.survey`.execute(db);
}

async function seenLikeTheFrame(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.answered_count enable row level security`.execute(db);
	await sql`create policy by_scope on collect.answered_count for select to tallygrove_app using (
		(select auth.scope()) = 'network' or state_fips = any ((select auth.desk_states())::text[]))`.execute(db);
	await sql`create policy rehearsals_apart on collect.answered_count as restrictive for select to tallygrove_app using (
		nullif(survey_id = any ((select collect.hidden_surveys())::uuid[]), true) is not null)`.execute(db);
	await sql`grant select on collect.answered_count to tallygrove_app`.execute(db);
}

/** Cells that responses count in, one by one. Nothing of a survey that was never opened is ever shown by days. */
const cellsOf = (responses: RawBuilder<unknown>, sign: 1 | -1) => sql`
	select r.survey_id, k.crop_key, f.state_fips, f.county_fips, f.stratum_key,
		coalesce(floor(extract(epoch from r.first_submitted_at - s.opened_at) / 86400), 0)::int as day,
		${sql.lit(sign)} as operations, ${sql.lit(sign)} * k.trees as trees
	from ${responses} r join collect.frame_operation f using (survey_id, operation_id) join collect.survey s using (survey_id)
		cross join lateral (select 'all' as crop_key, coalesce(sum(c.bearing_trees), 0) as trees
			from collect.frame_crop c where c.survey_id = f.survey_id and c.operation_id = f.operation_id
		union all select c.crop_key, c.bearing_trees
			from collect.frame_crop c where c.survey_id = f.survey_id and c.operation_id = f.operation_id) k
	where r.submitted_at is not null`;

/** What came and went, a row a cell; nothing where an answer was only amended. */
const gather = (changes: RawBuilder<unknown>) => sql`
	select array_agg((survey_id, crop_key, state_fips, county_fips, stratum_key, day, operations, trees)::collect.answered_count)
		into added
	from (select survey_id, crop_key, state_fips, county_fips, stratum_key, day,
			sum(operations)::int as operations, sum(trees)::bigint as trees from (${changes}) d
		group by 1, 2, 3, 4, 5, 6 having sum(operations) <> 0 or sum(trees) <> 0 order by 1, 2, 3, 4, 5, 6) g`;

async function keepByTriggers(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.add_to_answered_counts(added collect.answered_count[]) returns void language plpgsql as $$
		begin
			if (select count(*) from (select distinct survey_id, county_fips, stratum_key from unnest(added)) p) <= 100 then
				perform collect.lock_stratum(survey_id, county_fips, stratum_key)
				from (select distinct survey_id, county_fips, stratum_key from unnest(added) order by 1, 2, 3) p;
			else
				perform pg_advisory_xact_lock(2040, hashtext(survey_id::text))
				from (select distinct survey_id from unnest(added) order by 1) p;
			end if;
			insert into collect.answered_count as c select * from unnest(added)
			on conflict (survey_id, crop_key, state_fips, county_fips, stratum_key, day) do update set
				operations = c.operations + excluded.operations, bearing_trees = c.bearing_trees + excluded.bearing_trees;
		end $$`.execute(db);
	const [came, went] = [cellsOf(sql`came`, 1), cellsOf(sql`went`, -1)];
	// Definer: a grower who answers sees no count, and nobody writes one by hand.
	await sql`create function collect.count_answers() returns trigger language plpgsql security definer set search_path = '' as $$
		declare
			added collect.answered_count[];
		begin
			if tg_op = 'INSERT' then ${gather(came)};
			elsif tg_op = 'DELETE' then ${gather(went)};
			else
				-- A step that is kept changes nothing here, and is by far the most frequent.
				if not exists (select from came where submitted_at is not null)
					and not exists (select from went where submitted_at is not null) then
					return null;
				end if;
				${gather(sql`${came} union all ${went}`)};
			end if;
			if added is not null then
				perform collect.add_to_answered_counts(added);
			end if;
			return null;
		end $$`.execute(db);
	await sql`revoke all on function collect.count_answers(), collect.add_to_answered_counts(collect.answered_count[])
		from public`.execute(db);
	const events = { insert: "new table as came", delete: "old table as went" };
	for (const [event, tables] of Object.entries({ ...events, update: "old table as went new table as came" }))
		await sql`create trigger ${sql.id(`count_${event}`)} after ${sql.raw(event)} on collect.response
			referencing ${sql.raw(tables)} for each statement execute function collect.count_answers()`.execute(db);
}

/** Of a whole survey from nothing: for responses written past the triggers, and where its opening is moved. */
async function recount(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.recount_answers(of_survey uuid) returns void language plpgsql as $$
		begin
			perform pg_advisory_xact_lock(2040, hashtext(of_survey::text));
			delete from collect.answered_count where survey_id = of_survey;
			insert into collect.answered_count
			select survey_id, crop_key, state_fips, county_fips, stratum_key, day, sum(operations), sum(trees)
			from (${cellsOf(sql`(select * from collect.response where survey_id = of_survey)`, 1)}) d group by 1, 2, 3, 4, 5, 6;
		end $$`.execute(db);
	await sql`create function collect.recount_moved_answers() returns trigger language plpgsql security definer
		set search_path = '' as $$
		begin
			perform collect.recount_answers(new.survey_id);
			return null;
		end $$`.execute(db);
	await sql`revoke all on function collect.recount_answers(uuid), collect.recount_moved_answers() from public`.execute(
		db,
	);
	await sql`create trigger recount_answers after update of opened_at on collect.survey for each row
		when (old.opened_at is distinct from new.opened_at) execute function collect.recount_moved_answers()`.execute(db);
}
