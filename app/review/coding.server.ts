import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { type Order, pageByKey, type PagePart } from "#app/lib/page-by-key.server.ts";
import type { Beside, PageByKey, Place } from "#app/lib/page-by-key.ts";

const pageSize = 50;

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

/**
 * The one place that says what was told in words in a survey, as it was sent in last, that the viewer can see. Words are few
 * among answers: they are gathered first, and what they are about is then looked up for each by its key. Left to itself the
 * planner, which cannot know how few, went through all growers for each (50,000 operations: 30 s and more).
 */
function toldIn(viewer: Associate, surveyId: string, questionKeys: string[], responseId?: string) {
	return sql`told as materialized (select r.response_id, r.survey_id, r.operation_id, a.told
		from collect.response r
		cross join lateral (select answers from collect.submission b where b.response_id = r.response_id
			and b.withdrawn_at is null and not b.late order by b.version desc limit 1) sent
		cross join lateral jsonb_array_elements(sent.answers -> 'answers') a(told)
		where r.survey_id = ${surveyId} and r.submitted_at is not null and r.state_fips = any (${viewer.stateFips}::text[])
			and a.told ->> 'questionKey' = any (${questionKeys}::text[]) and a.told ->> 'kind' = 'given'
			and ${responseId === undefined ? sql`true` : sql`r.response_id = ${responseId}`}),
	decided as materialized (select a.*, d.number, d.act, d.answer, d.made_by, d.made_at,
			coalesce(d.act = 'coded' and d.was -> 'value' = a.told -> 'value', false) as is_coded
		from told a left join lateral (select * from collect.correction x where x.response_id = a.response_id
			and x.question_key = a.told ->> 'questionKey'
			and x.planting_id is not distinct from (a.told ->> 'plantingId')::uuid order by x.number desc limit 1) d on true)`;
}

/** Whose words they are, and about what. */
const withGrowers = sql`decided d
	cross join lateral (select f.county_fips, f.state_fips from collect.frame_operation f
		where f.survey_id = d.survey_id and f.operation_id = d.operation_id limit 1) f
	cross join lateral (select o.name from directory.operation o where o.operation_id = d.operation_id limit 1) o
	join directory.county c on c.county_fips = f.county_fips
	join directory.state s on s.state_fips = f.state_fips
	left join lateral (select p.crop_key from directory.planting p
		where p.planting_id = (d.told ->> 'plantingId')::uuid limit 1) p on true
	left join auth.person b on b.person_id = d.made_by`;

const columns = sql`d.response_id as "responseId", d.operation_id as "operationId",
	o.name as "operationName", c.name as "countyName", s.postal as "statePostal", s.state_fips as "stateFips",
	s.time_zone as "timeZone", d.told ->> 'questionKey' as "questionKey", d.told ->> 'plantingId' as "plantingId",
	p.crop_key as "cropKey", d.told ->> 'value' as words, coalesce(d.number, 0) as seen,
	case when d.is_coded then d.answer -> 'codes' end as codes,
	case when d.act = 'coded' then b.display_name end as "codedBy",
	case when d.act = 'coded' then d.made_at end as "codedAt"`;

const byPlace: Order = {
	keys: [
		{ by: sql.ref("c.name"), kind: "text" },
		{ by: sql.ref("o.name"), kind: "text" },
		{ by: sql.ref("d.response_id"), kind: "uuid" },
		{ by: sql`coalesce(d.told ->> 'plantingId', '')`, kind: "text" },
		{ by: sql`(d.told ->> 'questionKey')`, kind: "text" },
	],
	direction: "asc",
};

/** A page of what growers of the viewer's states told in words in a survey, by county and name. */
export async function listToldInWords(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ questionKeys, show, ...beside }: Beside & { questionKeys: string[]; show: "open" | "done" },
): Promise<PageByKey<ToldInWords>> {
	const read = async ({ beyond, inOrder, place, limit }: PagePart) => {
		const { rows } = await sql<ToldInWords & { place: Place }>`with ${toldIn(viewer, surveyId, questionKeys)}
			select ${columns}, ${place} as place from ${withGrowers}
			where d.is_coded = ${show === "done"} and ${beyond} order by ${inOrder} limit ${limit}`.execute(trx);
		return rows;
	};
	return pageByKey(byPlace, beside, pageSize, read);
}

/** How many words have no code yet, how many have one or were left as they are, and those that have one with it, each once. */
export async function countToldInWords(trx: Trx, viewer: Associate, surveyId: string, questionKeys: string[]) {
	type Told = { open: number; done: number; coded: { words: string; codes: string[] }[] };
	const { rows } = await sql<Told>`with ${toldIn(viewer, surveyId, questionKeys)}
		select (count(*) filter (where not is_coded))::int as open, (count(*) filter (where is_coded))::int as done,
			coalesce(jsonb_agg(distinct jsonb_build_object('words', told ->> 'value', 'codes', answer -> 'codes'))
				filter (where is_coded and answer -> 'codes' <> '[]'), '[]') as coded
		from decided`.execute(trx);
	return rows[0]!;
}

/** One grower's words. */
export async function listWordsOfResponse(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ questionKeys, responseId }: { questionKeys: string[]; responseId: string },
): Promise<ToldInWords[]> {
	const { rows } = await sql<ToldInWords>`with ${toldIn(viewer, surveyId, questionKeys, responseId)}
		select ${columns} from ${withGrowers}`.execute(trx);
	return rows;
}
