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

/** The one place that says whose words an associate can see; which words there are is kept (`collect.word_told`). */
const toldIn = (viewer: Associate, surveyId: string, questionKeys: string[]) => sql`collect.word_told w
	where w.survey_id = ${surveyId} and w.state_fips = any (${viewer.stateFips}::text[])
		and w.question_key = any (${questionKeys}::text[])`;

/**
 * Whose words they are, and about what, of the few that are shown. Each is looked up by its key: the planner cannot know how few
 * they are, and went through all growers for each (50,000 operations: 30 s and more).
 */
const besideWords = sql`
	join directory.county c on c.county_fips = w.county_fips
	join directory.state s on s.state_fips = w.state_fips
	left join lateral (select p.crop_key from directory.planting p where p.planting_id = w.planting_id limit 1) p on true
	left join lateral (select x.number, x.act, x.made_by, x.made_at from collect.correction x
		where x.response_id = w.response_id and x.question_key = w.question_key
			and x.planting_id is not distinct from w.planting_id order by x.number desc limit 1) d on true
	left join auth.person b on b.person_id = d.made_by`;

const columns = sql`w.response_id as "responseId", w.operation_id as "operationId",
	w.name as "operationName", c.name as "countyName", s.postal as "statePostal", s.state_fips as "stateFips",
	s.time_zone as "timeZone", w.question_key as "questionKey", w.planting_id as "plantingId",
	p.crop_key as "cropKey", w.words, coalesce(d.number, 0) as seen, w.codes,
	case when d.act = 'coded' then b.display_name end as "codedBy",
	case when d.act = 'coded' then d.made_at end as "codedAt"`;

const operationName = sql`cross join lateral (select o.name from directory.operation o
	where o.operation_id = w.operation_id limit 1) o`;

const byPlace: Order = {
	keys: [
		{ by: sql.ref("c.name"), kind: "text" },
		{ by: sql.ref("o.name"), kind: "text" },
		{ by: sql.ref("w.response_id"), kind: "uuid" },
		{ by: sql`coalesce(w.planting_id::text, '')`, kind: "text" },
		{ by: sql.ref("w.question_key"), kind: "text" },
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
		const { rows } = await sql<ToldInWords & { place: Place }>`with
			told as materialized (select w.* from ${toldIn(viewer, surveyId, questionKeys)}
				and (w.codes is not null) = ${show === "done"}),
			shown as materialized (select w.*, o.name, ${place} as place, row_number() over (order by ${inOrder}) as at
				from told w join directory.county c on c.county_fips = w.county_fips ${operationName}
				where ${beyond} order by ${inOrder} limit ${limit})
			select ${columns}, w.place from shown w ${besideWords} order by w.at`.execute(trx);
		return rows;
	};
	return pageByKey(byPlace, beside, pageSize, read);
}

/** How many words have no code yet, how many have one or were left as they are, and those that have one with it, each once. */
export async function countToldInWords(trx: Trx, viewer: Associate, surveyId: string, questionKeys: string[]) {
	type Told = { open: number; done: number; coded: { words: string; codes: string[] }[] };
	const { rows } = await sql<Told>`
		select (count(*) filter (where w.codes is null))::int as open, (count(w.codes))::int as done,
			coalesce(jsonb_agg(distinct jsonb_build_object('words', w.words, 'codes', w.codes)) filter (where w.codes <> '{}'), '[]')
				as coded
		from ${toldIn(viewer, surveyId, questionKeys)}`.execute(trx);
	return rows[0]!;
}

/** One grower's words. */
export async function listWordsOfResponse(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	{ questionKeys, responseId }: { questionKeys: string[]; responseId: string },
): Promise<ToldInWords[]> {
	const { rows } = await sql<ToldInWords>`with told as materialized (select w.*, o.name
			from (select w.* from ${toldIn(viewer, surveyId, questionKeys)} and w.response_id = ${responseId}) w ${operationName})
		select ${columns} from told w ${besideWords}`.execute(trx);
	return rows;
}
