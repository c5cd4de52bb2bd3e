import { type Kysely, sql } from "kysely";

// A first answer changes the tallies of its place and seldom any other row. With room left on their pages the changed rows stay
// there and no index is written (PostgreSQL 15, processor time for the 26 tallies of one submission: 1.1 ms before, 0.5 after).
// Facts are changed less often, by corrections.
export async function up(db: Kysely<unknown>): Promise<void> {
	await sql`alter table collect.tally set (fillfactor = 70)`.execute(db);
	await sql`alter table collect.fact set (fillfactor = 90)`.execute(db);
	await defineAddition(db);
}

/** The state of PostgreSQL's own regr_* aggregates, in its order. */
const columns = ["n", "sum_x", "m_xx", "sum_y", "m_yy", "m_xy"];
const state = (row: string) => sql.raw(`array[${columns.map((column) => `${row}.${column}`).join(", ")}]`);

/**
 * Adds new facts to their tallies; moments by PostgreSQL's own pairwise update, which subtracts nothing large. They
 * are tallied anew instead where adding would be wrong or slow: in a statement that also changed facts, whose own trigger has
 * tallied all of them by then; where an owner has another operation in the same county and stratum, whose sums must be added
 * before the two largest are taken; and in many places at once.
 */
async function defineAddition(db: Kysely<unknown>): Promise<void> {
	const added = sql`
		select survey_id, measure_key, crop_key, county_fips, left(county_fips, 2) as state_fips, stratum_key,
			regr_count(y, x)::int as n, (collect.moments(y, x))[4] as sum_y, (collect.moments(y, x))[2] as sum_x,
			coalesce(regr_syy(y, x), 0) as m_yy, coalesce(regr_sxx(y, x), 0) as m_xx, coalesce(regr_sxy(y, x), 0) as m_xy,
			regr_count(y, x)::int as owners, coalesce((array_agg(y order by y desc nulls last))[1], 0) as largest_y,
			coalesce((array_agg(y order by y desc nulls last))[2], 0) as second_y,
			collect.count_days(array_agg(y) filter (where is_day and y is not null)) as days,
			(count(*) filter (where set_aside))::int as set_aside,
			(count(*) - regr_count(y, x) - count(*) filter (where set_aside))::int as unanswered
		from (
			select f.survey_id, f.measure_key, f.crop_key, f.county_fips, f.stratum_key, f.is_day, f.set_aside,
				case when not f.set_aside then f.y end as y, f.x
			from changed f
		) fact
		group by survey_id, county_fips, stratum_key, measure_key, crop_key`;
	const both = sql`float8_regr_combine(${state("t")}, ${state("excluded")})`;
	await sql`create or replace function collect.add_to_tallies() returns trigger language plpgsql as $$
		declare
			own_scope text := coalesce(current_setting('tallygrove.scope', true), '');
			adds boolean;
		begin
			perform set_config('tallygrove.scope', 'network', true);
			select coalesce(current_setting('tallygrove.retallied', true), '') = '' and count(*) <= 100 into adds
			from (select distinct survey_id, county_fips, stratum_key from changed) touched;
			if adds then
				perform collect.lock_stratum(survey_id, county_fips, stratum_key)
				from (select distinct survey_id, county_fips, stratum_key from changed order by 1, 2, 3) touched;
				select not exists (
					select from (select distinct survey_id, county_fips, stratum_key, owner_id, operation_id from changed) c
					join collect.fact f using (survey_id, owner_id, county_fips, stratum_key)
					where f.operation_id <> c.operation_id
				) into adds;
			end if;
			if adds then
				insert into collect.tally as t ${added}
				on conflict (survey_id, measure_key, crop_key, county_fips, stratum_key) do update set
					n = t.n + excluded.n, sum_y = t.sum_y + excluded.sum_y, sum_x = t.sum_x + excluded.sum_x,
					m_xx = (${both})[3], m_yy = (${both})[5], m_xy = (${both})[6],
					owners = t.owners + excluded.owners,
					largest_y = case when t.owners = 0 then excluded.largest_y when excluded.owners = 0 then t.largest_y
						else greatest(t.largest_y, excluded.largest_y) end,
					-- 0 also stands for nobody, so that counts of owners say which there are; null is greater than nothing.
					second_y = case when t.owners = 0 then excluded.second_y when excluded.owners = 0 then t.second_y
						else greatest(least(t.largest_y, excluded.largest_y), case when t.owners > 1 then t.second_y end,
							case when excluded.owners > 1 then excluded.second_y end) end,
					days = case when t.days is null then excluded.days when excluded.days is null then t.days
						else collect.sum_days(t.days, excluded.days) end,
					set_aside = t.set_aside + excluded.set_aside, unanswered = t.unanswered + excluded.unanswered;
			else
				perform collect.retally(array_agg(survey_id), array_agg(county_fips), array_agg(stratum_key))
				from (select distinct survey_id, county_fips, stratum_key from changed) touched;
			end if;
			perform set_config('tallygrove.scope', own_scope, true);
			return null;
		end $$`.execute(db);
}
