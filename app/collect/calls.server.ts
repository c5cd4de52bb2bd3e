import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countRows, type Order, pageByKey, type PagePart } from "#app/lib/page-by-key.server.ts";
import type { Place } from "#app/lib/page-by-key.ts";
import { searchPattern } from "#app/lib/search-pattern.ts";
import type { CallQuery, ContactOutcome } from "./contacts.schema.ts";
import type { Disposition } from "./frame-list.server.ts";
import { isWaitedFor } from "./waited-for.server.ts";

const pageSize = 50;

/** Operations and answers of one county's part of a stratum, in the viewer's states; who does not belong is not counted. */
export async function listCallCells(trx: Trx, viewer: Associate, surveyId: string) {
	return trx
		.selectFrom("collect.frame_count")
		.where("survey_id", "=", surveyId)
		.where("crop_key", "=", "all")
		.where("state_fips", "in", viewer.stateFips)
		.where("disposition", "!=", "not_eligible")
		.groupBy(["county_fips", "stratum_key"])
		.having(sql`sum(operations)`, ">", 0)
		.orderBy("county_fips")
		.orderBy("stratum_key")
		.select(["county_fips as countyFips", "stratum_key as stratumKey"])
		.select([
			sql<number>`sum(operations)::int`.as("frameSize"),
			sql<number>`coalesce(sum(operations) filter (where disposition = 'complete'), 0)::int`.as("answered"),
			sql<number>`sum(bearing_trees)::float8`.as("bearingTrees"),
		])
		.execute();
}

/** A cell with what one more answer from it is worth, as `worthOfCalls` tells it. */
export type WorthCell = { countyFips: string; stratumKey: string; frameSize: number; answered: number } & {
	worth: number;
	share: number;
};
export type CallRow = {
	operationId: string;
	name: string;
	contactName: string;
	phone: string | null;
	countyName: string;
	statePostal: string;
	timeZone: string;
	disposition: Disposition;
	bearingTrees: number;
	/** The newest contact about this survey, or about none; null before the first. */
	outcome: ContactOutcome | null;
	madeAt: Date | null;
	note: string | null;
	nextOn: string | null;
	nextTime: string | null;
	/** Promised for today, or for a day that has gone by. */
	due: boolean;
	/** Answered of asked in the operation's county and stratum, and what one more takes off the county's variance. */
	answeredHere: number;
	askedHere: number;
	share: number;
};

const today = sql`(now() at time zone z.time_zone)::date`;
const isDue = sql<boolean>`coalesce(c.next_on <= ${today}, false)`;
const shown = {
	all: sql`true`,
	to_call: sql`(c.next_on is null or c.next_on <= ${today})`,
	due: sql`c.next_on <= ${today}`,
	later: sql`c.next_on > ${today}`,
};

/**
 * The frame with everybody's newest contact, looked up one by one: the planner cannot know how many rows the policies let
 * through, and joined whole it once chose to go through all contacts for each operation. With 50,000 operations that took
 * 26 minutes.
 */
const waitedFor = (viewer: Associate, surveyId: string) => sql`collect.frame_operation f
	join directory.operation o on o.operation_id = f.operation_id
	join directory.state z on z.state_fips = f.state_fips
	left join lateral (select n.outcome, n.made_at, n.note, n.next_on, n.next_time from collect.contact n
		where n.operation_id = f.operation_id and (n.survey_id is null or n.survey_id = ${surveyId})
		order by n.made_at desc, n.contact_id limit 1) c on true
	where f.survey_id = ${surveyId} and f.state_fips = any (${viewer.stateFips}) and ${isWaitedFor}`;

/** By name of the operation or its contact, or by the number on its paper form. */
function matching({ q, show, state }: CallQuery) {
	const pattern = searchPattern(q);
	const named = sql`(o.name ~* ${pattern} or o.contact_name ~* ${pattern}
		or left(f.operation_id::text, 8) = ${q.toLowerCase()})`;
	return sql`${shown[show]} and ${q === "" ? sql`true` : named} and ${state === "all" ? sql`true` : sql`f.state_fips = ${state}`}`;
}

/**
 * A page of the calls to make: what was promised for today first, then where an answer is worth most; within one county and
 * stratum larger orchards first. Who has no number, or was tried today, comes after the others. Ties are ordered by id.
 */
export async function listCalls(
	trx: Trx,
	viewer: Associate,
	surveyId: string,
	query: CallQuery,
	cells: readonly WorthCell[],
) {
	const frame = sql`${waitedFor(viewer, surveyId)} and ${matching(query)}`;
	const count = await countRows(trx, (most) => sql`(select from ${frame} limit ${most})`);
	const read = async ({ beyond, inOrder, place, limit }: PagePart) => {
		const { rows } = await sql<CallRow & { place: Place }>`
		with waited as materialized (select f.operation_id, f.county_fips, f.stratum_key, f.disposition, o.name, o.contact_name,
				o.phone, z.postal, z.time_zone, c.outcome, c.made_at, c.note, c.next_on, c.next_time, ${isDue} as due,
				coalesce((c.made_at at time zone z.time_zone)::date = ${today}, false) as tried_today,
				coalesce((select sum(t.bearing_trees) from collect.frame_crop t where t.survey_id = f.survey_id
					and t.operation_id = f.operation_id), 0)::float8 as bearing_trees
			from ${frame}),
		cell as (select * from jsonb_to_recordset(${JSON.stringify(cells)}::jsonb) as w ("countyFips" text,
			"stratumKey" text, worth float8, share float8, answered int, "frameSize" int))
		select w.operation_id as "operationId", w.name, w.contact_name as "contactName", w.phone, k.name as "countyName",
			w.postal as "statePostal", w.time_zone as "timeZone", w.disposition,
			w.bearing_trees as "bearingTrees", w.outcome, w.made_at as "madeAt", w.note, w.next_on as "nextOn",
			to_char(w.next_time, 'HH24:MI') as "nextTime", w.due, coalesce(e.answered, 0) as "answeredHere",
			coalesce(e."frameSize", 0) as "askedHere", coalesce(e.share, 0) as share, ${place} as place
		from waited w join directory.county k on k.county_fips = w.county_fips
			left join cell e on e."countyFips" = w.county_fips and e."stratumKey" = w.stratum_key
		where ${beyond} order by ${inOrder} limit ${limit}`.execute(trx);
		return rows;
	};
	return { ...(await pageByKey(byWorth, query, pageSize, read)), ...count };
}

/** Promised ones by their time, those of no certain time at the end of their day. */
const promisedAt = sql`coalesce(extract(epoch from case when w.due then w.next_on + coalesce(w.next_time, '24:00') end)::float8,
	'infinity')`;
const byWorth: Order = {
	keys: [
		{ by: promisedAt, kind: "float8" },
		{ by: sql`(coalesce(w.phone, '') = '')`, kind: "boolean" },
		{ by: sql.ref("w.tried_today"), kind: "boolean" },
		{ by: sql`(- coalesce(e.worth, 0))`, kind: "float8" },
		{ by: sql`(- w.bearing_trees)`, kind: "float8" },
		{ by: sql.ref("w.operation_id"), kind: "uuid" },
	],
	direction: "asc",
};

/**
 * How many calls were promised for today, or for a day that has gone by. Those of whom any contact promised it are looked at one
 * by one, not the whole frame; no state's clock is more than a day ahead.
 */
export async function countDueCalls(trx: Trx, viewer: Associate, surveyId: string): Promise<number> {
	const { rows } = await sql<{ due: number }>`
		with promised as materialized (select distinct n.operation_id from collect.contact n
			where n.next_on <= (now() at time zone 'UTC')::date + 1 and (n.survey_id is null or n.survey_id = ${surveyId}))
		select count(*)::int as due from promised p cross join lateral (
			select from ${waitedFor(viewer, surveyId)} and f.operation_id = p.operation_id and ${shown.due} limit 1) due`.execute(
		trx,
	);
	return rows[0]!.due;
}

/** Who is on the line: an operation of the survey's frame in the viewer's states, whatever became of it. */
export async function findCall(
	trx: Trx,
	viewer: Associate,
	{ surveyId, operationId }: { surveyId: string; operationId: string },
) {
	return trx
		.selectFrom("collect.frame_operation as f")
		.innerJoin("directory.operation as o", "o.operation_id", "f.operation_id")
		.innerJoin("directory.county as k", "k.county_fips", "f.county_fips")
		.innerJoin("directory.state as z", "z.state_fips", "f.state_fips")
		.where("f.survey_id", "=", surveyId)
		.where("f.operation_id", "=", operationId)
		.where("f.state_fips", "in", viewer.stateFips)
		.where("o.status", "=", "active")
		.select(["o.operation_id as operationId", "o.name", "o.contact_name as contactName", "o.phone", "o.email"])
		.select(["o.language", "k.name as countyName", "z.postal as statePostal", "z.time_zone as timeZone"])
		.select(sql<Disposition>`f.disposition`.as("disposition"))
		.executeTakeFirst();
}
export type Call = NonNullable<Awaited<ReturnType<typeof findCall>>>;
