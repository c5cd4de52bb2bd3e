import { type Kysely, sql } from "kysely";

// The same tallies in one step: what was worked out of a cell in two more passes over its row is now told by the aggregate
// itself, which shares one state among all that are told of the moments. (PostgreSQL 15, processor time against the plain
// GROUP BY: of 10,000 responses 1.9 times before and 1.65 after, with owners and two largest 5.1 and 4.2; of 100,000
// responses 1.5 and 1.4, and 3.6 as before.) Where new facts are added, each owner has one operation, so that none is counted.
export async function up(db: Kysely<unknown>): Promise<void> {
	await defineTallies(db, "tallies_of_survey", sql`of_survey uuid`, sql`f.survey_id = of_survey`);
	await defineTallies(
		db,
		"tallies_of_stratum",
		sql`of_survey uuid, of_county text, of_stratum text`,
		sql`f.survey_id = of_survey and f.county_fips = of_county and f.stratum_key = of_stratum`,
	);
	await defineAddition(db);
}

type Part = ReturnType<typeof sql>;

/**
 * The one GROUP BY: what a query does not select of it is not computed. A fact that does not count has no y here, so that no
 * sum needs a filter of its own. The sums are taken from the moments, since a sum by itself would be another state of each cell.
 */
const groupBy = (
	facts: Part,
	{ surveyId, keys, owners, largest }: { surveyId: Part; keys: Part; owners: Part; largest: (at: 1 | 2) => Part },
) => sql`
	select ${surveyId}, measure_key, crop_key, county_fips, left(county_fips, 2) as state_fips, stratum_key,
		regr_count(y, x)::int as n, (collect.moments(y, x))[4] as sum_y, (collect.moments(y, x))[2] as sum_x,
		coalesce(regr_syy(y, x), 0) as m_yy, coalesce(regr_sxx(y, x), 0) as m_xx, coalesce(regr_sxy(y, x), 0) as m_xy,
		${owners}::int as owners, coalesce(${largest(1)}, 0) as largest_y, coalesce(${largest(2)}, 0) as second_y,
		collect.count_days(array_agg(y) filter (where is_day and y is not null)) as days,
		(count(*) filter (where set_aside))::int as set_aside,
		(count(*) - regr_count(y, x) - count(*) filter (where set_aside))::int as unanswered
	from (
		select f.survey_id, f.measure_key, f.crop_key, f.county_fips, f.stratum_key, f.owner_id, f.is_day, f.set_aside,
			case when not f.set_aside then f.y end as y, f.x
		from ${facts}
	) fact
	group by ${keys}`;

const owned = sql`(count(distinct owner_id) filter (where y is not null))`;
/** The largest or second largest answer, which is its owner's whole where no owner has two. */
const told = (at: 1 | 2) => sql`(array_agg(y order by y desc nulls last))[${sql.lit(at)}]`;

async function defineTallies(db: Kysely<unknown>, name: string, takes: Part, reach: Part): Promise<void> {
	// Few cells have an owner of several operations: theirs are read once more and summed.
	const largest = (at: 1 | 2) => sql`case when ${owned} = regr_count(y, x) then ${told(at)} else (
			select sum(o.y) from collect.fact o
			where o.survey_id = of_survey and o.county_fips = fact.county_fips and o.stratum_key = fact.stratum_key
				and o.measure_key = fact.measure_key and o.crop_key = fact.crop_key and not o.set_aside and o.y is not null
			group by o.owner_id order by 1 desc offset ${sql.lit(at - 1)} limit 1
		) end`;
	await sql`create or replace function ${sql.id("collect", name)}(${takes}) returns setof collect.tally language sql stable as $$
		${groupBy(sql`collect.fact f where ${reach}`, {
			surveyId: sql`of_survey as survey_id`,
			keys: sql`county_fips, stratum_key, measure_key, crop_key`,
			owners: owned,
			largest,
		})}
	$$`.execute(db);
}

/**
 * Adds new facts to their tallies; moments by PostgreSQL's own pairwise update, which subtracts nothing large. They
 * are tallied anew instead where adding would be wrong or slow: in a statement that also changed facts, whose own trigger has
 * tallied all of them by then; where an owner has another operation in the same county and stratum, whose sums must be added
 * before the two largest are taken; and in many places at once.
 */
async function defineAddition(db: Kysely<unknown>): Promise<void> {
	const added = groupBy(sql`changed f`, {
		surveyId: sql`survey_id`,
		keys: sql`survey_id, county_fips, stratum_key, measure_key, crop_key`,
		owners: sql`regr_count(y, x)`,
		largest: told,
	});
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
