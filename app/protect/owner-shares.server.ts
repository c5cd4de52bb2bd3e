import { sql, type RawBuilder, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { OwnerShares } from "./owner-shares.ts";
import { ALL_CROPS, REGION, RESPONDENTS, surveyQuantities } from "./survey-table.ts";

// The two lists multiply: each crop and all of them, at each level of area. One pass over the survey's facts.
const everyLevel = sql`grouping sets ((f.crop_key), ()),
	grouping sets ((c.county_fips), (c.district_key), (c.state_fips), ())`;
const cropKey = sql`case when grouping(f.crop_key) = 1 then ${sql.lit(ALL_CROPS)} else f.crop_key end`;
// A county without a district has no row at that level: its district_key is null, and so is this.
const areaKey = sql`case when grouping(c.county_fips) = 0 then c.county_fips
	when grouping(c.district_key) = 0 then c.district_key
	when grouping(c.state_fips) = 0 then c.state_fips
	else ${sql.lit(REGION)} end`;

/**
 * Owners, totals and two largest owners of every base quantity, for each crop and all crops, at every level of area.
 * Owners, not operations: what one owner holds in several places is summed before the two largest are taken. Facts set
 * aside do not count. All crops are summed from the crops here, so that the table adds up whatever was set aside.
 * A base quantity that an operation did not answer counts as 0.
 * @param baseKeys keys of the form's base measures, without their "base.".
 * @returns cells with at least one owner, ordered by area and crop.
 */
export async function listOwnerShares(
	trx: Transaction<DB>,
	surveyId: string,
	baseKeys: readonly string[],
): Promise<OwnerShares[]> {
	const quantityKeys = surveyQuantities(baseKeys).map(({ key }) => key);
	const { rows } = await sql<Record<string, number | string | null>>`
		with fact as (
			select crop_key, operation_id, owner_id, county_fips, measure_key, y
			from collect.fact
			where survey_id = ${surveyId} and not set_aside and y is not null and crop_key <> ${ALL_CROPS}
		), owned as (
			select ${cropKey} as crop_key, ${areaKey} as area_key, f.owner_id,
				${sql.join([sql`count(distinct f.operation_id)::float8 as ${sql.ref(RESPONDENTS)}`, ...baseKeys.map(baseSum)])}
			from fact f join directory.county c using (county_fips)
			group by f.owner_id, ${everyLevel}
		), answered as (
			select ${cropKey} as crop_key, ${areaKey} as area_key, f.measure_key, count(distinct f.owner_id) as owners
			from fact f join directory.county c using (county_fips)
			group by f.measure_key, ${everyLevel}
		), fewest as (
			select crop_key, area_key, min(owners)::int as fewest_owners from answered group by crop_key, area_key
		)
		select o.area_key, o.crop_key, count(*)::int as owners, min(f.fewest_owners) as fewest_owners,
			case when count(*) = 1 then min(o.owner_id::text) end as sole_owner, ${sql.join(quantityKeys.flatMap(shareColumns))}
		from owned o join fewest f using (crop_key, area_key)
		where o.area_key is not null
		group by o.area_key, o.crop_key
		order by o.area_key, o.crop_key`.execute(trx);
	return rows.map((row) => sharesOf(row, quantityKeys));
}

function baseSum(key: string): RawBuilder<unknown> {
	return sql`coalesce(sum(f.y) filter (where f.measure_key = ${`base.${key}`}), 0) as ${sql.ref(key)}`;
}

function shareColumns(key: string): RawBuilder<unknown>[] {
	const column = sql.ref(`o.${key}`);
	const largest = sql`array_agg(${column} order by ${column} desc)`;
	return [
		sql`sum(${column}) as ${sql.ref(`${key}_total`)}`,
		sql`(${largest})[1] as ${sql.ref(`${key}_top1`)}`,
		sql`coalesce((${largest})[2], 0) as ${sql.ref(`${key}_top2`)}`,
	];
}

function sharesOf(row: Record<string, number | string | null>, quantityKeys: readonly string[]): OwnerShares {
	const share = (key: string) => ({
		total: Number(row[`${key}_total`]),
		top1: Number(row[`${key}_top1`]),
		top2: Number(row[`${key}_top2`]),
	});
	return {
		areaKey: String(row.area_key),
		cropKey: String(row.crop_key),
		owners: Number(row.owners),
		fewestOwners: Number(row.fewest_owners),
		soleOwner: row.sole_owner === null ? null : String(row.sole_owner),
		quantities: Object.fromEntries(quantityKeys.map((key) => [key, share(key)])),
	};
}
