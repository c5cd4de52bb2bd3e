import { sql, type RawBuilder, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { OwnerShares } from "./owner-shares.ts";
import { ALL_CROPS, REGION, RESPONDENTS } from "./codes.ts";
import type { OwnerShare } from "./table.ts";

// The two lists multiply: each crop and all of them, at each level of area. One pass over the survey's facts.
const everyLevel = sql`grouping sets ((f.crop_key), ()),
	grouping sets ((c.county_fips), (c.district_key), (c.state_fips), ())`;
const cropKey = sql`case when grouping(f.crop_key) = 1 then ${sql.lit(ALL_CROPS)} else f.crop_key end`;
// A county without a district has no row at that level: its district_key is null, and so is this.
const areaKey = sql`case when grouping(c.county_fips) = 0 then c.county_fips
	when grouping(c.district_key) = 0 then c.district_key
	when grouping(c.state_fips) = 0 then c.state_fips
	else ${sql.lit(REGION)} end`;

/** What a survey's shares are made of. */
export interface ShareQuery {
	surveyId: string;
	/** Keys of the form's base measures, without their "base.". */
	baseKeys: readonly string[];
	/** Measures made of a question marked sensitive. */
	sensitiveKeys?: readonly string[];
	/** Those of them that are 0 or 1 an operation, which are quantities too. */
	countedKeys?: readonly string[];
	/** n of the (n, k) rule, where it is used. */
	largestOwners?: number | null;
	/** The district of each county, null where it is in none; without it, as the districts are drawn today. */
	districtOf?: ReadonlyMap<string, string | null>;
}

/**
 * Owners, totals and two largest owners of every base quantity, for each crop and all crops, at every level of area.
 * Owners, not operations: what one owner holds in several places is summed before the two largest are taken. Facts set
 * aside do not count. All crops are summed from the crops here, so that the table adds up whatever was set aside.
 * A base quantity that an operation did not answer counts as 0.
 * @returns cells with at least one owner, ordered by area and crop.
 */
export async function listOwnerShares(trx: Transaction<DB>, query: ShareQuery): Promise<OwnerShares[]> {
	const { surveyId, baseKeys, sensitiveKeys = [], countedKeys = [], largestOwners = null, districtOf } = query;
	const amounts = [RESPONDENTS, ...baseKeys];
	const ofOwner = [
		sql`count(distinct f.operation_id)::float8 as ${sql.ref(RESPONDENTS)}`,
		...baseKeys.map((key) => sumOf(`base.${key}`, key)),
		...countedKeys.map((key) => sumOf(key, key)),
	];
	const { rows } = await sql<Row>`
		with fact as (
			select crop_key, operation_id, owner_id, county_fips, measure_key, y, x
			from collect.fact
			where survey_id = ${surveyId} and not set_aside and y is not null and crop_key <> ${ALL_CROPS}
		), place as (${placeOf(districtOf)}), owned as (
			select ${cropKey} as crop_key, ${areaKey} as area_key, f.owner_id, ${sql.join(ofOwner)}
			from fact f join place c using (county_fips)
			group by f.owner_id, ${everyLevel}
		), answered as (
			select ${cropKey} as crop_key, ${areaKey} as area_key, f.measure_key, count(distinct f.owner_id) as owners,
				f.measure_key = any (${sensitiveKeys}) and min(f.y / nullif(f.x, 0)) = max(f.y / nullif(f.x, 0)) as uniform
			from fact f join place c using (county_fips)
			group by f.measure_key, ${everyLevel}
		), fewest as (
			select crop_key, area_key, min(owners)::int as fewest_owners, bool_or(uniform) as uniform
			from answered group by crop_key, area_key
		)
		select o.area_key, o.crop_key, count(*)::int as owners, min(f.fewest_owners) as fewest_owners,
			bool_or(f.uniform) as uniform,
			case when count(*) = 1 then min(o.owner_id::text) end as sole_owner,
			${sql.join([...amounts.flatMap((key) => shareColumns(key, largestOwners)), ...countedKeys.map(totalColumn)])}
		from owned o
			join fewest f using (crop_key, area_key)
			left join (select owner_id from directory.owner where publication_waived_at is not null) w using (owner_id)
		where o.area_key is not null
		group by o.area_key, o.crop_key
		order by o.area_key, o.crop_key`.execute(trx);
	return rows.map((row) => sharesOf(row, amounts, countedKeys));
}

function placeOf(districtOf: ShareQuery["districtOf"]): RawBuilder<unknown> {
	if (!districtOf) return sql`select county_fips, district_key, state_fips from directory.county`;
	const counties = [...districtOf].map(([county_fips, district_key]) => ({ county_fips, district_key }));
	return sql`select county_fips, district_key, left(county_fips, 2) as state_fips
		from jsonb_to_recordset(${JSON.stringify(counties)}::jsonb) as told(county_fips text, district_key text)`;
}

type Row = Record<string, number | string | boolean | null>;

function sumOf(measureKey: string, name: string): RawBuilder<unknown> {
	return sql`coalesce(sum(f.y) filter (where f.measure_key = ${measureKey}), 0) as ${sql.id(name)}`;
}

function totalColumn(key: string): RawBuilder<unknown> {
	return sql`sum(${sql.id("o", key)}) as ${sql.id(`${key}_total`)}`;
}

function shareColumns(key: string, largestOwners: number | null): RawBuilder<unknown>[] {
	const column = sql.id("o", key);
	const largest = sql`array_agg(${column} order by ${column} desc)`;
	const columns = [
		totalColumn(key),
		sql`(${largest})[1] as ${sql.id(`${key}_top1`)}`,
		sql`coalesce((${largest})[2], 0) as ${sql.id(`${key}_top2`)}`,
		sql`coalesce(max(${column}) filter (where w.owner_id is null), 0) as ${sql.id(`${key}_guarded`)}`,
	];
	if (largestOwners === null) return columns;
	const unwaived = sql`array_agg(${column} order by ${column} desc) filter (where w.owner_id is null)`;
	const sum = sql`(select coalesce(sum(amount), 0) from unnest((${unwaived})[1:${sql.lit(largestOwners)}]) as amount)`;
	return [...columns, sql`${sum} as ${sql.id(`${key}_largest`)}`];
}

function sharesOf(row: Row, amounts: readonly string[], countedKeys: readonly string[]): OwnerShares {
	const total = (key: string) => Number(row[`${key}_total`]);
	// Of a sensitive answer only the count is guarded: nobody's amount stands out in it.
	const counts = countedKeys.map((key) => [key, { total: total(key), top1: 0, top2: 0, largest: 0 }] as const);
	return {
		areaKey: String(row.area_key),
		cropKey: String(row.crop_key),
		owners: Number(row.owners),
		fewestOwners: Number(row.fewest_owners),
		soleOwner: row.sole_owner === null ? null : String(row.sole_owner),
		...(row.uniform === true && { uniform: true }),
		quantities: Object.fromEntries([...amounts.map((key) => [key, shareOf(row, key)] as const), ...counts]),
	};
}

function shareOf(row: Row, key: string): OwnerShare {
	const number = (part: string) => Number(row[`${key}_${part}`]);
	const [total, top1, top2, first] = [number("total"), number("top1"), number("top2"), number("guarded")];
	return {
		total,
		top1,
		top2,
		...(first < top1 && { guarded: { first, other: top1 } }),
		...(`${key}_largest` in row && { largest: number("largest") }),
	};
}
