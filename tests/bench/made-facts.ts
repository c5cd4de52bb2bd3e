import type { Client } from "pg";

export const countyCount = 3_100;
export const countiesAState = 62;
export const classCount = 12;

/**
 * Invented facts of one measure and crop: `size` operations over 3,100 counties and 12 strata in each. In one cell of twenty
 * every owner has two; one operation in fifty is set aside, and one in fifty did not answer. Written past the triggers and
 * tallied by nobody.
 */
export async function makeFacts(owner: Client, surveyId: string, size: number): Promise<void> {
	await owner.query("truncate collect.fact, collect.tally");
	await owner.query("alter table collect.fact disable trigger user");
	await owner.query("select setseed(0.2040)");
	await owner.query(
		`insert into collect.fact (survey_id, measure_key, crop_key, operation_id, owner_id, county_fips, state_fips, stratum_key,
			y, x, set_aside)
		select $1, 'crop_loss', 'apple', md5('operation ' || i)::uuid,
			md5('owner ' || case when i % 20 = 0 then i - i / $6 % 2 * $6 else i end)::uuid,
			lpad(state::text, 2, '0') || lpad((county % $4)::text, 3, '0'), lpad(state::text, 2, '0'),
			lpad(state::text, 2, '0') || ':' || (i / $3) % $5,
			case when i % 50 <> 1 then random() * 4000 end, case when i % 50 <> 1 then 100 + random() * 9900 end, i % 50 = 2
		from (select i, (i % $3) as county, (i % $3) / $4 as state from generate_series(1, $2::int) i) made`,
		[surveyId, size, countyCount, countiesAState, classCount, countyCount * classCount],
	);
	await owner.query("alter table collect.fact enable trigger user");
	await owner.query("vacuum analyze collect.fact");
}
