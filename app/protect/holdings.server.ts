import { sql, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { Holding } from "./holdings.ts";
import { ALL_CROPS, RESPONDENTS } from "./codes.ts";

/**
 * What each owner answered of each crop in each county, as the facts are now: the smallest parts that `listOwnerShares`
 * sums, with the owners behind them. Facts set aside are not in it.
 * @param keys `baseKeys` of the form's base measures, without their "base."; `countedKeys` of measures that are quantities
 *   of the table too.
 * @returns ordered by owner, county and crop, so that the same facts give the same list.
 */
export async function listHoldings(
	trx: Transaction<DB>,
	surveyId: string,
	{ baseKeys, countedKeys = [] }: { baseKeys: readonly string[]; countedKeys?: readonly string[] },
): Promise<Holding[]> {
	const measures = [
		...baseKeys.map((key) => [`base.${key}`, key] as const),
		...countedKeys.map((key) => [key, key] as const),
	];
	const { rows } = await sql<{
		owner: string;
		areaKey: string;
		cropKey: string;
		waived: boolean;
		digest: string;
		amounts: number[];
	}>`
		select f.owner_id::text as owner, f.county_fips as "areaKey", f.crop_key as "cropKey",
			bool_or(w.owner_id is not null) as waived,
			md5(string_agg(concat_ws(' ', measure_key, operation_id, y, x), ',' order by measure_key, operation_id)) as digest,
			array[${sql.join([
				sql`count(distinct operation_id)::float8`,
				...measures.map(([measureKey]) => sql`coalesce(sum(y) filter (where measure_key = ${measureKey}), 0)`),
			])}] as amounts
		from collect.fact f
			left join (select owner_id from directory.owner where publication_waived_at is not null) w using (owner_id)
		where f.survey_id = ${surveyId} and not f.set_aside and f.y is not null and f.crop_key <> ${ALL_CROPS}
		group by f.owner_id, f.county_fips, f.crop_key
		order by f.owner_id, f.county_fips, f.crop_key`.execute(trx);
	const keys = [RESPONDENTS, ...measures.map(([, key]) => key)];
	return rows.map(({ amounts, waived, ...row }) => ({
		...row,
		...(waived && { waived }),
		amounts: Object.fromEntries(keys.map((key, at) => [key, amounts[at]!] as const)),
	}));
}
