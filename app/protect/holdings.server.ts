import { sql, type Transaction } from "kysely";
import type { DB } from "#db/schema.ts";
import type { Holding } from "./holdings.ts";
import { ALL_CROPS, RESPONDENTS } from "./survey-table.ts";

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
	const { rows } = await sql<{ owner: string; areaKey: string; cropKey: string; digest: string; amounts: number[] }>`
		select owner_id::text as owner, county_fips as "areaKey", crop_key as "cropKey",
			md5(string_agg(concat_ws(' ', measure_key, operation_id, y, x), ',' order by measure_key, operation_id)) as digest,
			array[${sql.join([
				sql`count(distinct operation_id)::float8`,
				...measures.map(([measureKey]) => sql`coalesce(sum(y) filter (where measure_key = ${measureKey}), 0)`),
			])}] as amounts
		from collect.fact
		where survey_id = ${surveyId} and not set_aside and y is not null and crop_key <> ${ALL_CROPS}
		group by owner_id, county_fips, crop_key
		order by owner_id, county_fips, crop_key`.execute(trx);
	const keys = [RESPONDENTS, ...measures.map(([, key]) => key)];
	return rows.map(({ amounts, ...row }) => ({
		...row,
		amounts: Object.fromEntries(keys.map((key, at) => [key, amounts[at]!] as const)),
	}));
}
