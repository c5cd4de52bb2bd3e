import { type Kysely, sql } from "kysely";

// The same tallies with one sort less in each cell: the days of a cell were sorted before they were counted, which sorts them
// itself, and a sort is begun also where a measure has no days. (PostgreSQL 15, processor time with owners and two largest
// against the plain GROUP BY of 100,000 responses: 4.3 times before, 4.1 after.) A survey's own tallies are grouped by no
// survey, and a state is the beginning of its county's number.
export async function up(db: Kysely<unknown>): Promise<void> {
	await defineTallies(db, "tallies_of_survey", sql`of_survey uuid`, sql`where f.survey_id = of_survey`);
	await defineTallies(
		db,
		"tallies_of_stratum",
		sql`of_survey uuid, of_county text, of_stratum text`,
		sql`where f.survey_id = of_survey and f.county_fips = of_county and f.stratum_key = of_stratum`,
	);
	await defineAddition(db);
}

type Part = ReturnType<typeof sql>;

/**
 * The one GROUP BY: what a query does not select of it is not computed. A fact that does not count has no y here, so that no
 * sum needs a filter of its own.
 */
const groupBy = (facts: Part, survey: { value: Part; by: Part }) => sql`
	select survey_id, measure_key, crop_key, county_fips, left(county_fips, 2) as state_fips, stratum_key, m[1]::int as n, m[4] as sum_y, m[2] as sum_x,
		m[5] as m_yy, m[3] as m_xx, m[6] as m_xy, owners, coalesce(two[1], 0) as largest_y, coalesce(two[2], 0) as second_y,
		days, set_aside, (told - m[1])::int - set_aside as unanswered
	from (
		select cell.*, case when owners = m[1] then cell.largest else (
			select (array_agg(owned.y order by owned.y desc))[1:2]
			from (
				select sum(o.y) as y from collect.fact o
				where o.survey_id = cell.survey_id and o.county_fips = cell.county_fips and o.stratum_key = cell.stratum_key
					and o.measure_key = cell.measure_key and o.crop_key = cell.crop_key and not o.set_aside and o.y is not null
				group by o.owner_id
			) owned
		) end as two
		from (
			select ${survey.value} as survey_id, measure_key, crop_key, county_fips, stratum_key,
				collect.moments(y, x) as m,
				(count(distinct owner_id) filter (where y is not null))::int as owners,
				(array_agg(y order by y desc nulls last))[1:2] as largest,
				collect.count_days(array_agg(y) filter (where is_day and y is not null)) as days,
				(count(*) filter (where set_aside))::int as set_aside,
				count(*) as told
			from (
				select f.survey_id, f.measure_key, f.crop_key, f.county_fips, f.stratum_key, f.owner_id, f.is_day, f.set_aside,
					case when not f.set_aside then f.y end as y, f.x
				from ${facts}
			) fact
			group by ${survey.by} county_fips, stratum_key, measure_key, crop_key
		) cell
		-- Keeps the two largest from being worked out twice, once for each.
		offset 0
	) tallied`;

async function defineTallies(db: Kysely<unknown>, name: string, takes: Part, reach: Part): Promise<void> {
	await sql`create or replace function ${sql.id("collect", name)}(${takes}) returns setof collect.tally language sql stable as $$
		${groupBy(sql`collect.fact f ${reach}`, { value: sql`of_survey`, by: sql`` })}
	$$`.execute(db);
}

/**
 * Adds new facts to their tallies; moments by PostgreSQL's own pairwise update, which subtracts nothing large. They
 * are tallied anew instead where adding would be wrong or slow: in a statement that also changed facts, whose own trigger has
 * tallied all of them by then; where an owner has another operation in the same county and stratum, whose sums must be added
 * before the two largest are taken; and in many places at once.
 */
async function defineAddition(db: Kysely<unknown>): Promise<void> {
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
				insert into collect.tally as t ${groupBy(sql`changed f`, { value: sql`survey_id`, by: sql`survey_id,` })}
				on conflict (survey_id, measure_key, crop_key, county_fips, stratum_key) do update set
					(n, sum_x, m_xx, sum_y, m_yy, m_xy) = (select m[1]::int, m[2], m[3], m[4], m[5], m[6] from float8_regr_combine(
						array[t.n, t.sum_x, t.m_xx, t.sum_y, t.m_yy, t.m_xy],
						array[excluded.n, excluded.sum_x, excluded.m_xx, excluded.sum_y, excluded.m_yy, excluded.m_xy]) m),
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
