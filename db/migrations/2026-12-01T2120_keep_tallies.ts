import { type Kysely, sql } from "kysely";

// Tallies are kept beside the facts that they sum, by triggers: whoever writes a fact, a correction or a withdrawal, a hand
// at the database included, cannot leave a tally behind.
export async function up(db: Kysely<unknown>): Promise<void> {
	await widenFacts(db);
	await createTally(db);
	await defineDays(db);
	await defineTallies(db, "tallies_of_survey", sql`of_survey uuid`, sql`f.survey_id = of_survey`);
	await defineTallies(
		db,
		"tallies_of_stratum",
		sql`of_survey uuid, of_county text, of_stratum text`,
		sql`f.survey_id = of_survey and f.county_fips = of_county and f.stratum_key = of_stratum`,
	);
	await defineRetally(
		db,
		"survey",
		sql`of_survey uuid`,
		// Waits for every answer on its way in, and they for this.
		sql`perform pg_advisory_xact_lock(2040, hashtext(of_survey::text));`,
		{ call: sql`collect.tallies_of_survey(of_survey)`, reach: sql`t.survey_id = of_survey` },
	);
	await defineRetally(
		db,
		"stratum",
		sql`of_survey uuid, of_county text, of_stratum text`,
		// A response lies in one county and stratum, so that this is the one lock that it takes: two who answer at once in
		// the same place come one after the other, and never wait for each other in a ring.
		sql`perform pg_advisory_xact_lock_shared(2040, hashtext(of_survey::text));
			perform pg_advisory_xact_lock(hashtextextended(of_survey::text || of_county || of_stratum, 2040));`,
		{
			call: sql`collect.tallies_of_stratum(of_survey, of_county, of_stratum)`,
			reach: sql`t.survey_id = of_survey and t.county_fips = of_county and t.stratum_key = of_stratum`,
		},
	);
	await keepByTriggers(db);
	await sql`select collect.retally_survey(survey_id) from (select distinct survey_id from collect.fact) s`.execute(db);
}

async function widenFacts(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.fact
		-- Neither: the operation was asked and did not answer. Counted, and summed nowhere.
		alter column y drop not null,
		alter column x drop not null,
		-- y is a day of the year: its tally counts each day.
		add column is_day boolean not null default false,
		add constraint fact_whole check (num_nonnulls(y, x) in (0, 2)),
		add constraint fact_finite check (y not in ('NaN', 'Infinity', '-Infinity') and x not in ('NaN', 'Infinity', '-Infinity')),
		add constraint fact_day check (not is_day or y is null or (y = trunc(y) and y between 1 and 366))`.execute(db);
	await sql`create index fact_by_stratum on collect.fact (survey_id, county_fips, stratum_key)`.execute(db);
	// Taken one by one, the columns promise more cells than there are, and the planner sorts what it could hash.
	await sql`create statistics collect.fact_cells (ndistinct)
		on survey_id, measure_key, crop_key, county_fips, stratum_key from collect.fact`.execute(db);
}

async function createTally(db: Kysely<unknown>): Promise<void> {
	await sql`create table collect.tally (
		survey_id uuid not null,
		measure_key text not null,
		crop_key text not null,
		county_fips text not null,
		state_fips text not null,
		stratum_key text not null,
		n integer not null,
		sum_y double precision not null,
		sum_x double precision not null,
		-- Centred: sums of squared deviations from the cell's own means, and of their products.
		m_yy double precision not null,
		m_xx double precision not null,
		m_xy double precision not null,
		-- Of the cell alone: neither owners nor their largest add up over cells.
		owners integer not null,
		largest_y double precision not null,
		second_y double precision not null,
		days jsonb,
		set_aside integer not null,
		unanswered integer not null,
		primary key (survey_id, measure_key, crop_key, county_fips, stratum_key)
	)`.execute(db);
	await sql`create index tally_by_stratum on collect.tally (survey_id, county_fips, stratum_key)`.execute(db);
	await sql`alter table collect.tally enable row level security`.execute(db);
	await sql`create policy by_network on collect.tally to tallygrove_app using (auth.scope() = 'network')`.execute(db);
	await sql`create policy desk_reads on collect.tally for select to tallygrove_app
		using (auth.scope() = 'desk' and state_fips = any (auth.scope_states()))`.execute(db);
	await sql`grant select, insert, update, delete on collect.tally to tallygrove_app`.execute(db);
}

/** A histogram: each day with how many told it. Strict, since most measures have no days. */
async function defineDays(db: Kysely<unknown>): Promise<void> {
	await sql`create function collect.count_days(days double precision[]) returns jsonb language sql immutable strict as $$
		select jsonb_agg(jsonb_build_object('value', day, 'n', told) order by day)
		from (select day, count(*) as told from unnest(days) day group by day) d
	$$`.execute(db);
}

type Part = ReturnType<typeof sql>;

/** The one GROUP BY. An owner's several operations are summed before the two largest are taken. */
async function defineTallies(db: Kysely<unknown>, name: string, takes: Part, reach: Part): Promise<void> {
	await sql`create function ${sql.id("collect", name)}(${takes}) returns setof collect.tally language sql stable as $$
		select survey_id, measure_key, crop_key, county_fips, min(state_fips), stratum_key,
			(count(*) filter (where kept))::int,
			coalesce(sum(y) filter (where kept), 0), coalesce(sum(x) filter (where kept), 0),
			coalesce(regr_syy(y, x) filter (where kept), 0), coalesce(regr_sxx(y, x) filter (where kept), 0),
			coalesce(regr_sxy(y, x) filter (where kept), 0),
			(count(*) filter (where kept and owner_row = 1))::int,
			coalesce((array_agg(owner_y order by owner_y desc) filter (where kept and owner_row = 1))[1], 0),
			coalesce((array_agg(owner_y order by owner_y desc) filter (where kept and owner_row = 1))[2], 0),
			collect.count_days(array_agg(y order by y) filter (where kept and is_day)),
			(count(*) filter (where set_aside))::int,
			(count(*) filter (where y is null and not set_aside))::int
		from (
			select f.survey_id, f.measure_key, f.crop_key, f.county_fips, f.state_fips, f.stratum_key, f.y, f.x, f.is_day, f.set_aside,
				not f.set_aside and f.y is not null as kept,
				row_number() over of_owner as owner_row,
				sum(f.y) over of_owner as owner_y
			from collect.fact f
			where ${reach}
			window of_owner as (partition by f.survey_id, f.county_fips, f.stratum_key, f.measure_key, f.crop_key, f.owner_id,
				not f.set_aside and f.y is not null)
		) fact
		group by survey_id, county_fips, stratum_key, measure_key, crop_key
	$$`.execute(db);
}

async function defineRetally(
	db: Kysely<unknown>,
	name: string,
	takes: Part,
	lock: Part,
	{ call, reach }: { call: Part; reach: Part },
): Promise<void> {
	// The lock is a statement of its own: what comes after it sees what was written by whoever held it.
	await sql`create function ${sql.id("collect", `retally_${name}`)}(${takes}) returns void language plpgsql as $$
		begin
			${lock}
			with fresh as materialized (select * from ${call}),
			gone as (
				delete from collect.tally t where ${reach} and not exists (select from fresh f
					where f.measure_key = t.measure_key and f.crop_key = t.crop_key
						and f.county_fips = t.county_fips and f.stratum_key = t.stratum_key)
			)
			insert into collect.tally as t select * from fresh
			on conflict (survey_id, measure_key, crop_key, county_fips, stratum_key) do update set
				state_fips = excluded.state_fips, n = excluded.n, sum_y = excluded.sum_y, sum_x = excluded.sum_x,
				m_yy = excluded.m_yy, m_xx = excluded.m_xx, m_xy = excluded.m_xy, owners = excluded.owners,
				largest_y = excluded.largest_y, second_y = excluded.second_y, days = excluded.days,
				set_aside = excluded.set_aside, unanswered = excluded.unanswered
			where t.* is distinct from excluded.*;
		end $$`.execute(db);
}

async function keepByTriggers(db: Kysely<unknown>): Promise<void> {
	// Many places at once (a season of the demo, a correction of everything) are tallied anew in one pass over the survey.
	await sql`create function collect.retally(surveys uuid[], counties text[], strata text[]) returns void language plpgsql as $$
		declare
			place record;
			done uuid;
		begin
			for place in
				select survey_id, county_fips, stratum_key, count(*) over (partition by survey_id) as places
				from unnest(surveys, counties, strata) as t (survey_id, county_fips, stratum_key)
				order by survey_id, county_fips, stratum_key
			loop
				if place.places <= 100 then
					perform collect.retally_stratum(place.survey_id, place.county_fips, place.stratum_key);
				elsif done is distinct from place.survey_id then
					perform collect.retally_survey(place.survey_id);
					done := place.survey_id;
				end if;
			end loop;
		end $$`.execute(db);
	// A grower's scope sees no neighbour's fact and no tally, so the sums are made under the network's and it goes on under
	// its own. Nothing of them comes back to the grower.
	await sql`create function collect.keep_tallies() returns trigger language plpgsql as $$
		declare
			own_scope text := coalesce(current_setting('tallygrove.scope', true), '');
		begin
			perform set_config('tallygrove.scope', 'network', true);
			if tg_op = 'UPDATE' then
				perform collect.retally(array_agg(survey_id), array_agg(county_fips), array_agg(stratum_key))
				from (select survey_id, county_fips, stratum_key from before
					union select survey_id, county_fips, stratum_key from changed) touched;
			else
				perform collect.retally(array_agg(survey_id), array_agg(county_fips), array_agg(stratum_key))
				from (select distinct survey_id, county_fips, stratum_key from changed) touched;
			end if;
			perform set_config('tallygrove.scope', own_scope, true);
			return null;
		end $$`.execute(db);
	const events = { insert: sql`new table as changed`, delete: sql`old table as changed` };
	for (const [event, table] of Object.entries({ ...events, update: sql`old table as before new table as changed` })) {
		await sql`create trigger ${sql.id(`keep_tallies_${event}`)} after ${sql.raw(event)} on collect.fact
			referencing ${table} for each statement execute function collect.keep_tallies()`.execute(db);
	}
	const functions = sql`collect.count_days, collect.tallies_of_survey, collect.tallies_of_stratum, collect.retally_survey,
		collect.retally_stratum, collect.retally, collect.keep_tallies`;
	await sql`revoke all on function ${functions} from public`.execute(db);
	await sql`grant execute on function ${functions} to tallygrove_app`.execute(db);
}
