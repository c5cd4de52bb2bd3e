import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { ToldQuantity } from "./odd-quantities.ts";

/** The survey of the newest earlier season that asked the same form: what a season is held against. */
export async function findLastSurvey(trx: Trx, surveyId: string): Promise<string | undefined> {
	const { rows } = await sql<{ survey_id: string }>`select l.survey_id from collect.survey s
		join collect.form_version v using (form_version_id)
		join collect.form_version lv on lv.form_id = v.form_id
		join collect.survey l on l.form_version_id = lv.form_version_id and l.season < s.season and l.opened_at is not null
		where s.survey_id = ${surveyId} order by l.season desc, l.opened_at desc limit 1`.execute(trx);
	return rows[0]?.survey_id;
}

/**
 * What operations told of quantities, as it counts now, beside what they told last season. What was set aside or not given is
 * left out, of this season and of last.
 * @param only of these states and crops; the caller's scope narrows the states further.
 */
export async function listToldQuantities(
	trx: Trx,
	{ surveyId, lastSurveyId }: { surveyId: string; lastSurveyId: string | undefined },
	measureKeys: string[],
	only: { stateFips: string[]; cropKeys: string[] },
): Promise<ToldQuantity[]> {
	if (measureKeys.length === 0) return [];
	const { rows } = await sql<ToldQuantity>`select f.operation_id as "operationId", f.measure_key as "measureKey",
			f.crop_key as "cropKey", f.state_fips as "stateFips", c.district_key as "districtKey", f.y as now, l.y as last,
			p.y as plants
		from collect.fact f
		join directory.county c on c.county_fips = f.county_fips
		left join collect.fact l on l.survey_id = ${lastSurveyId ?? null}::uuid and l.measure_key = f.measure_key
			and l.crop_key = f.crop_key and l.operation_id = f.operation_id and not l.set_aside and l.y is not null
		left join collect.fact p on p.survey_id = f.survey_id and p.measure_key = 'base.bearing_trees'
			and p.crop_key = f.crop_key and p.operation_id = f.operation_id and not p.set_aside and p.y is not null
		where f.survey_id = ${surveyId} and f.measure_key = any (${measureKeys}::text[]) and not f.set_aside
			and f.y is not null and f.crop_key <> 'all' and f.state_fips = any (${only.stateFips}::text[])
			and f.crop_key = any (${only.cropKeys}::text[])
		order by f.measure_key, f.crop_key, f.state_fips, f.operation_id`.execute(trx);
	return rows;
}
