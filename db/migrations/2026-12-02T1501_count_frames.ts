import { type Kysely, sql } from "kysely";

// A frame is counted once and then kept: pages of the desk went through all of it at every view. One row a county, stratum,
// disposition and crop (`all`: of all crops together, each operation once). Triggers keep it in the same transaction, under the
// lock of a county and stratum that tallies take too; `collect.recount_frame` makes a whole survey's from nothing.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.frame_count (
		survey_id uuid not null references collect.survey on delete cascade,
		crop_key text not null,
		state_fips text not null,
		county_fips text not null,
		stratum_key text not null,
		size_class text not null,
		disposition text not null,
		-- Both 0 where nobody is left.
		operations integer not null,
		bearing_trees bigint not null,
		primary key (survey_id, crop_key, state_fips, county_fips, stratum_key, size_class, disposition)
	)`.execute(db);
	await seenLikeTheFrame(db);
	await keepByTriggers(db);
	await recount(db);
	await sql`select collect.recount_frame(survey_id) from collect.survey`.execute(db);
	await knowFrames(db);
}

async function seenLikeTheFrame(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.frame_count enable row level security`.execute(db);
	await sql`create policy by_scope on collect.frame_count for select to tallygrove_app using (
		(select auth.scope()) = 'network' or state_fips = any ((select auth.desk_states())::text[]))`.execute(db);
	await sql`create policy rehearsals_apart on collect.frame_count as restrictive for select to tallygrove_app using (
		nullif(survey_id = any ((select collect.hidden_surveys())::uuid[]), true) is not null)`.execute(db);
	await sql`grant select on collect.frame_count to tallygrove_app`.execute(db);
}

const place = sql`f.state_fips, f.county_fips, f.stratum_key, f.size_class, f.disposition`;
/** What one operation of a frame is counted with: once in all, and once for each of its crops. */
const countedWith = sql`(select 'all' as crop_key, 1 as operations, coalesce(sum(c.bearing_trees), 0) as trees
		from collect.frame_crop c where c.survey_id = f.survey_id and c.operation_id = f.operation_id
	union all select c.crop_key, 1, c.bearing_trees
		from collect.frame_crop c where c.survey_id = f.survey_id and c.operation_id = f.operation_id) k`;

/** Rows of `collect.frame_count` to be added, with the signs of what came and went. */
const ofOperations = (rows: string, sign: 1 | -1) => sql`
	select f.survey_id, k.crop_key, ${place}, ${sql.lit(sign)} * k.operations as operations, ${sql.lit(sign)} * k.trees as trees
	from ${sql.raw(rows)} f cross join lateral ${countedWith}`;
const ofCrops = (rows: string, sign: 1 | -1) => sql`
	select f.survey_id, k.crop_key, ${place}, ${sql.lit(sign)} * k.operations as operations, ${sql.lit(sign)} * k.trees as trees
	from ${sql.raw(rows)} c join collect.frame_operation f using (survey_id, operation_id)
		cross join lateral (values (c.crop_key, 1, c.bearing_trees), ('all', 0, c.bearing_trees)) k (crop_key, operations, trees)`;

/** Sums up what came and went, a row a cell. */
const gather = (changes: ReturnType<typeof sql>) => sql`
	select array_agg((survey_id, crop_key, state_fips, county_fips, stratum_key, size_class, disposition, operations,
			trees)::collect.frame_count) into added
	from (select survey_id, crop_key, state_fips, county_fips, stratum_key, size_class, disposition,
			sum(operations)::int as operations, sum(trees)::bigint as trees from (${changes}) d
		group by 1, 2, 3, 4, 5, 6, 7 having sum(operations) <> 0 or sum(trees) <> 0) g`;

async function keepByTriggers(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.add_to_frame_counts(added collect.frame_count[]) returns void language plpgsql as $$
		begin
			if (select count(*) from (select distinct survey_id, county_fips, stratum_key from unnest(added)) p) <= 100 then
				perform collect.lock_stratum(survey_id, county_fips, stratum_key)
				from (select distinct survey_id, county_fips, stratum_key from unnest(added) order by 1, 2, 3) p;
			else
				perform pg_advisory_xact_lock(2040, hashtext(survey_id::text))
				from (select distinct survey_id from unnest(added) order by 1) p;
			end if;
			insert into collect.frame_count as c select * from unnest(added)
			on conflict (survey_id, crop_key, state_fips, county_fips, stratum_key, size_class, disposition) do update set
				operations = c.operations + excluded.operations, bearing_trees = c.bearing_trees + excluded.bearing_trees;
		end $$`.execute(db);
	// Definer: a grower who answers sees no count, and nobody writes one by hand.
	const kinds = { frame_operation: ofOperations, frame_crop: ofCrops };
	for (const [table, of] of Object.entries(kinds)) {
		const name = sql.id("collect", `count_${table}`);
		await sql`create function ${name}() returns trigger language plpgsql security definer set search_path = '' as $$
			declare
				added collect.frame_count[];
			begin
				if tg_op = 'INSERT' then ${gather(of("came", 1))};
				elsif tg_op = 'DELETE' then ${gather(of("went", -1))};
				else ${gather(sql`${of("came", 1)} union all ${of("went", -1)}`)};
				end if;
				if added is not null then
					perform collect.add_to_frame_counts(added);
				end if;
				return null;
			end $$`.execute(db);
		await sql`revoke all on function ${name}(), collect.add_to_frame_counts(collect.frame_count[]) from public`.execute(
			db,
		);
		const events = { insert: "new table as came", delete: "old table as went" };
		for (const [event, tables] of Object.entries({ ...events, update: "old table as went new table as came" }))
			await sql`create trigger ${sql.id(`count_${event}`)} after ${sql.raw(event)} on ${sql.id("collect", table)}
				referencing ${sql.raw(tables)} for each statement execute function ${name}()`.execute(db);
	}
}

/** Counts of a whole survey from nothing, for frames written past the triggers. Whoever changes one waits meanwhile. */
async function recount(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.recount_frame(of_survey uuid) returns void language plpgsql as $$
		begin
			perform pg_advisory_xact_lock(2040, hashtext(of_survey::text));
			delete from collect.frame_count where survey_id = of_survey;
			insert into collect.frame_count
			select f.survey_id, coalesce(c.crop_key, 'all'), ${place}, count(distinct f.operation_id),
				coalesce(sum(c.bearing_trees), 0)
			from collect.frame_operation f left join collect.frame_crop c using (survey_id, operation_id)
			where f.survey_id = of_survey
			group by grouping sets ((f.survey_id, ${place}), (f.survey_id, c.crop_key, ${place}))
			having grouping(c.crop_key) = 1 or c.crop_key is not null;
		end $$`.execute(db);
	await sql`revoke all on function collect.recount_frame(uuid) from public`.execute(db);
}

/** A frame was empty when the planner last looked, and is opened at once: whoever freezes one says what is in it now. */
async function knowFrames(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.know_frames() returns void language plpgsql security definer set search_path = '' as $$
		begin
			analyze collect.frame_operation, collect.frame_crop, collect.frame_count;
		end $$`.execute(db);
	await sql`revoke all on function collect.know_frames() from public`.execute(db);
	await sql`grant execute on function collect.know_frames() to tallygrove_app`.execute(db);
}
