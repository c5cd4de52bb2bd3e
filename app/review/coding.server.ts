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

/** Which of it: not coded yet or coded, of one response, or all. */
export type ToldShown = { show?: "open" | "done"; responseId?: string };

/** The one place that says what was told in words in a survey, as it was sent in last, that the viewer can see. */
function told(viewer: Associate, surveyId: string, questionKeys: string[], { show, responseId }: ToldShown) {
	const isCoded = sql`coalesce(d.act = 'coded' and d.was -> 'value' = a.told -> 'value', false)`;
	return sql`collect.response r
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
			and ${responseId === undefined ? sql`true` : sql`r.response_id = ${responseId}`}
			and ${show === undefined ? sql`true` : show === "done" ? isCoded : sql`not ${isCoded}`}`;
}

const columns = sql`r.response_id as "responseId", r.operation_id as "operationId",
	o.name as "operationName", c.name as "countyName", s.postal as "statePostal", s.state_fips as "stateFips",
	s.time_zone as "timeZone", a.told ->> 'questionKey' as "questionKey", a.told ->> 'plantingId' as "plantingId",
	p.crop_key as "cropKey", a.told ->> 'value' as words, coalesce(d.number, 0) as seen,
	case when d.act = 'coded' and d.was -> 'value' = a.told -> 'value' then d.answer -> 'codes' end as codes,
	case when d.act = 'coded' then b.display_name end as "codedBy",
	case when d.act = 'coded' then d.made_at end as "codedAt"`;

const byPlace: Order = {
	keys: [
		{ by: sql.ref("c.name"), kind: "text" },
		{ by: sql.ref("o.name"), kind: "text" },
		{ by: sql.ref("r.response_id"), kind: "uuid" },
		{ by: sql`coalesce(a.told ->> 'plantingId', '')`, kind: "text" },
		{ by: sql`(a.told ->> 'questionKey')`, kind: "text" },
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
		const { rows } = await sql<ToldInWords & { place: Place }>`select ${columns}, ${place} as place
			from ${told(viewer, surveyId, questionKeys, { show })} and ${beyond} order by ${inOrder} limit ${limit}`.execute(trx);
		return rows;
	};
	return pageByKey(byPlace, beside, pageSize, read);
}

/** How many words have no code yet, and how many have one or were left as they are. */
export async function countToldInWords(trx: Trx, viewer: Associate, surveyId: string, questionKeys: string[]) {
	const count = (show: "open" | "done") =>
		sql`(select count(*)::int from ${told(viewer, surveyId, questionKeys, { show })})`;
	const { rows } = await sql<{ open: number; done: number }>`select ${count("open")} as open,
		${count("done")} as done`.execute(trx);
	return rows[0]!;
}

/** Words that were given a code, with it, each once. */
export async function listCodedWords(trx: Trx, viewer: Associate, surveyId: string, questionKeys: string[]) {
	const { rows } = await sql<{ words: string; codes: string[] }>`select distinct a.told ->> 'value' as words,
			d.answer -> 'codes' as codes
		from ${told(viewer, surveyId, questionKeys, { show: "done" })} and d.answer -> 'codes' <> '[]'`.execute(trx);
	return rows;
}

/** One grower's words. */
export async function listWordsOfResponse(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ questionKeys, responseId }: { questionKeys: string[]; responseId: string },
): Promise<ToldInWords[]> {
	const { rows } = await sql<ToldInWords>`select ${columns}
		from ${told(viewer, surveyId, questionKeys, { responseId })}`.execute(trx);
	return rows;
}
