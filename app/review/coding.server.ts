import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";

/** Words of one grower that can be given a code, with the code they were given last, if any. */
export type ToldInWords = {
	responseId: string;
	operationId: string;
	operationName: string;
	countyName: string;
	statePostal: string;
	stateFips: string;
	timeZone: string;
	questionKey: string;
	plantingId: string | null;
	cropKey: string | null;
	words: string;
	/** The newest decision about the place, also where it was about other words; 0 for none. */
	seen: number;
	/** Null where these words have none. */
	codes: string[] | null;
	codedBy: string | null;
	codedAt: Date | null;
};

/** What growers of the viewer's states told in words in a survey, as it was sent in last, by county and name. */
export async function listToldInWords(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	questionKeys: string[],
): Promise<ToldInWords[]> {
	if (questionKeys.length === 0) return [];
	const { rows } = await sql<ToldInWords>`select r.response_id as "responseId", r.operation_id as "operationId",
			o.name as "operationName", c.name as "countyName", s.postal as "statePostal", s.state_fips as "stateFips",
			s.time_zone as "timeZone", a.told ->> 'questionKey' as "questionKey", a.told ->> 'plantingId' as "plantingId",
			p.crop_key as "cropKey", a.told ->> 'value' as words, coalesce(d.number, 0) as seen,
			case when d.act = 'coded' and d.was -> 'value' = a.told -> 'value' then d.answer -> 'codes' end as codes,
			case when d.act = 'coded' then b.display_name end as "codedBy",
			case when d.act = 'coded' then d.made_at end as "codedAt"
		from collect.response r
		join collect.frame_operation f using (survey_id, operation_id)
		join directory.operation o on o.operation_id = r.operation_id
		join directory.county c on c.county_fips = f.county_fips
		join directory.state s on s.state_fips = f.state_fips
		cross join lateral (select answers from collect.submission b where b.response_id = r.response_id
			and b.withdrawn_at is null and not b.late order by b.version desc limit 1) sent
		cross join lateral jsonb_array_elements(sent.answers -> 'answers') a(told)
		left join directory.planting p on p.planting_id = (a.told ->> 'plantingId')::uuid
		left join lateral (select * from collect.correction x where x.response_id = r.response_id
			and x.question_key = a.told ->> 'questionKey'
			and x.planting_id is not distinct from (a.told ->> 'plantingId')::uuid order by x.number desc limit 1) d on true
		left join auth.person b on b.person_id = d.made_by
		where r.survey_id = ${surveyId} and r.submitted_at is not null and r.state_fips = any (${viewer.stateFips}::text[])
			and a.told ->> 'questionKey' = any (${questionKeys}::text[]) and a.told ->> 'kind' = 'given'
		order by c.name, o.name, r.response_id, "plantingId"`.execute(trx);
	return rows;
}
