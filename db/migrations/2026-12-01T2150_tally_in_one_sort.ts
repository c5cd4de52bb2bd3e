import { type Kysely, sql } from "kysely";

// The same tallies for a third of the work: an owner's sums were a window over every fact, where nearly every owner has one
// operation in a cell. Now owners are counted, and summed only in cells where one has several.
export async function up(db: Kysely<unknown>): Promise<void> {
	await redefineTallies(db, "tallies_of_survey", sql`of_survey uuid`, sql`f.survey_id = of_survey`);
	await redefineTallies(
		db,
		"tallies_of_stratum",
		sql`of_survey uuid, of_county text, of_stratum text`,
		sql`f.survey_id = of_survey and f.county_fips = of_county and f.stratum_key = of_stratum`,
	);
	// 3,100 counties of 12 strata need more than the 4 MB that a server gives by itself; less is written to disk and slow.
	await sql`alter function collect.retally_survey set work_mem = '64MB'`.execute(db);
	// The plan looks dear for what few cells may need, and compiling it takes longer than it saves.
	await sql`alter function collect.retally_survey set jit = off`.execute(db);
}

type Part = ReturnType<typeof sql>;

/**
 * The one GROUP BY: what a query does not select of it is not computed. (PostgreSQL 15, 400,000 facts in 37,200 cells,
 * processor time: 0.11 s for count and plain sums by county and stratum, 0.16 s for the moments, 0.48 s for all.)
 */
async function redefineTallies(db: Kysely<unknown>, name: string, takes: Part, reach: Part): Promise<void> {
	await sql`create or replace function ${sql.id("collect", name)}(${takes}) returns setof collect.tally language sql stable as $$
		select survey_id, measure_key, crop_key, county_fips, state_fips, stratum_key, n, sum_y, sum_x, m_yy, m_xx, m_xy,
			owners, coalesce(two[1], 0), coalesce(two[2], 0), days, set_aside, unanswered
		from (
			select cell.*, case when owners = n then cell.largest else (
				select (array_agg(owned.y order by owned.y desc))[1:2]
				from (
					select sum(o.y) as y from collect.fact o
					where o.survey_id = cell.survey_id and o.county_fips = cell.county_fips and o.stratum_key = cell.stratum_key
						and o.measure_key = cell.measure_key and o.crop_key = cell.crop_key and not o.set_aside and o.y is not null
					group by o.owner_id
				) owned
			) end as two
			from (
				select survey_id, measure_key, crop_key, county_fips, min(state_fips) as state_fips, stratum_key,
					(count(*) filter (where kept))::int as n,
					coalesce(sum(y) filter (where kept), 0) as sum_y,
					coalesce(sum(x) filter (where kept), 0) as sum_x,
					coalesce(regr_syy(y, x) filter (where kept), 0) as m_yy,
					coalesce(regr_sxx(y, x) filter (where kept), 0) as m_xx,
					coalesce(regr_sxy(y, x) filter (where kept), 0) as m_xy,
					(count(distinct owner_id) filter (where kept))::int as owners,
					(array_agg(y order by y desc) filter (where kept))[1:2] as largest,
					collect.count_days(array_agg(y order by y) filter (where kept and is_day)) as days,
					(count(*) filter (where set_aside))::int as set_aside,
					(count(*) filter (where y is null and not set_aside))::int as unanswered
				from (select f.*, not f.set_aside and f.y is not null as kept from collect.fact f where ${reach}) fact
				group by survey_id, county_fips, stratum_key, measure_key, crop_key
			) cell
			-- Keeps the two largest from being worked out twice, once for each.
			offset 0
		) tallied
	$$`.execute(db);
}
