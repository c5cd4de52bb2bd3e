import { type RawBuilder, sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import type { ListPart, Order, PagePart } from "#app/lib/page-by-key.server.ts";
import type { Place } from "#app/lib/page-by-key.ts";
import { searchPattern } from "#app/lib/search-pattern.ts";
import type { CallRow, WorthCell } from "./calls.server.ts";
import type { CallQuery } from "./contacts.schema.ts";
import { isWaitedFor } from "./waited-for.server.ts";

type Condition = RawBuilder<unknown>;
type FoundRow = Omit<CallRow, "answeredHere" | "askedHere" | "share"> & {
	countyFips: string;
	stratumKey: string;
	place: Place;
};

const today = sql`(now() at time zone z.time_zone)::date`;
const isDue = sql`coalesce(c.next_on <= ${today}, false)`;
const hasNoPhone = sql`(coalesce(o.phone, '') = '')`;
const wasTriedToday = sql`coalesce((c.made_at at time zone z.time_zone)::date = ${today}, false)`;

/**
 * The frame with everybody's operation and newest contact, looked up one by one: the planner cannot know how many rows the
 * policies let through. Joined whole it once chose to go through all contacts for each operation (26 minutes with 50,000
 * operations), and for the first thousand of a name it gathered all operations.
 */
export const waitedFor = (viewer: Associate, surveyId: string) => sql`collect.frame_operation f
	cross join lateral (select one.* from directory.operation one where one.operation_id = f.operation_id offset 0) o
	join directory.state z on z.state_fips = f.state_fips
	left join lateral (select n.outcome, n.made_at, n.note, n.next_on, n.next_time from collect.contact n
		where n.operation_id = f.operation_id and (n.survey_id is null or n.survey_id = ${surveyId})
		order by n.made_at desc, n.contact_id limit 1) c on true
	where f.survey_id = ${surveyId} and f.state_fips = any (${viewer.stateFips}) and ${isWaitedFor}`;

/** Those of whom any contact promised a call for today or earlier, or for today or later; no state's clock is a day off. */
export const promisedTo = {
	due: (surveyId: string) => promisedWhere(surveyId, sql`n.next_on <= (now() at time zone 'UTC')::date + 1`),
	later: (surveyId: string) => promisedWhere(surveyId, sql`n.next_on >= (now() at time zone 'UTC')::date - 1`),
};
const promisedWhere = (surveyId: string, when: Condition) => sql`select distinct n.operation_id from collect.contact n
	where ${when} and (n.survey_id is null or n.survey_id = ${surveyId})`;
/** Whose newest contact promised a call: by today, or for a later day. */
export const isPromised = { due: isDue, later: sql`c.next_on > ${today}` };

/** By name of the operation or its contact, or by the number on its paper form. */
export function isSoughtBy({ q, state }: CallQuery): Condition {
	const pattern = searchPattern(q);
	const named = sql`(o.name ~* ${pattern} or o.contact_name ~* ${pattern}
		or left(f.operation_id::text, 8) = ${q.toLowerCase()})`;
	return sql`${q === "" ? sql`true` : named} and ${state === "all" ? sql`true` : sql`f.state_fips = ${state}`}`;
}

/** What is read of each, with what it is put in order by: promised calls by their time, those of no time at the day's end. */
const columns = sql`f.operation_id, f.county_fips, f.stratum_key, f.disposition, o.name, o.contact_name, o.phone, z.postal,
	z.time_zone, c.outcome, c.made_at, c.note, c.next_on, c.next_time, ${isDue} as due, ${hasNoPhone} as no_phone,
	${wasTriedToday} as tried_today,
	coalesce(extract(epoch from case when ${isDue} then c.next_on + coalesce(c.next_time, '24:00') end)::float8,
		'infinity') as promised_at,
	(select - coalesce(sum(t.bearing_trees), 0) from collect.frame_crop t where t.survey_id = f.survey_id
		and t.operation_id = f.operation_id)::float8 as less_trees`;

const byWorth: Order["keys"] = [
	{ by: sql`e.less_worth`, kind: "float8" },
	{ by: sql`w.less_trees`, kind: "float8" },
	{ by: sql`w.operation_id`, kind: "uuid" },
];
const byPromise: Order["keys"] = [
	{ by: sql`w.promised_at`, kind: "float8" },
	{ by: sql`w.no_phone`, kind: "boolean" },
	{ by: sql`w.tried_today`, kind: "boolean" },
	...byWorth,
];
/** Who has no number, or was tried today, comes after the others. */
const turns = [
	{ noPhone: false, tried: false },
	{ noPhone: false, tried: true },
	{ noPhone: true, tried: false },
	{ noPhone: true, tried: true },
];

type Calls = {
	surveyId: string;
	query: CallQuery;
	cells: readonly WorthCell[];
	/** The operations that are sought, where they are few. */
	few: string[] | null;
};

/**
 * The calls in their order, part by part: what was promised for today, then everybody else from the cells where an answer is
 * worth most, of which no more are read than the page needs. All 14,000 of 50,000 put in order took 250 ms.
 */
export function callParts(trx: Trx, viewer: Associate, calls: Calls): ListPart<FoundRow>[] {
	const { surveyId, query, few } = calls;
	const frame = sql`${waitedFor(viewer, surveyId)} and ${isSoughtBy(query)}`;
	const read = async (from: Condition, { inOrder, place, limit }: PagePart, where: Condition) => {
		const { rows } = await sql<FoundRow>`
			with cell as materialized (select * from unnest(${calls.cells.map((cell) => cell.countyFips)}::text[],
				${calls.cells.map((cell) => cell.stratumKey)}::text[], ${calls.cells.map((cell) => -cell.worth)}::float8[])
				as e (county_fips, stratum_key, less_worth))
			select w.operation_id as "operationId", w.name, w.contact_name as "contactName", w.phone, k.name as "countyName",
				w.postal as "statePostal", w.time_zone as "timeZone", w.disposition, - w.less_trees as "bearingTrees", w.outcome,
				w.made_at as "madeAt", w.note, w.next_on as "nextOn", to_char(w.next_time, 'HH24:MI') as "nextTime", w.due,
				w.county_fips as "countyFips", w.stratum_key as "stratumKey", ${place} as place
			from ${from} join directory.county k on k.county_fips = w.county_fips
			where ${where} order by ${inOrder} limit ${limit}`.execute(trx);
		return rows;
	};
	const among = (ids: Condition, those: Condition) => (part: PagePart) =>
		read(
			sql`(${ids}) p cross join lateral (select ${columns} from ${frame} and f.operation_id = p.operation_id and ${those}) w
				left join lateral (select coalesce(max(cell.less_worth), 0) as less_worth from cell
					where cell.county_fips = w.county_fips and cell.stratum_key = w.stratum_key) e on true`,
			part,
			part.beyond,
		);
	const byCells = (those: Condition) => (part: PagePart) =>
		read(
			sql`(select * from cell e where ${part.reach(1)} order by e.less_worth ${sql.raw(part.direction)}) e
				cross join lateral (select * from (select ${columns} from ${frame} and f.county_fips = e.county_fips
					and f.stratum_key = e.stratum_key and ${those}) w
				where ${part.beyond} order by ${part.inOrder} limit ${part.limit}) w`,
			part,
			sql`true`,
		);
	const fewIds = few && sql`select unnest(${few}::uuid[]) as operation_id`;
	const promised = (when: "due" | "later") => ({
		order: { keys: byPromise, direction: "asc" as const },
		read: among(fewIds ?? promisedTo[when](surveyId), isPromised[when]),
	});
	if (query.show === "due" || query.show === "later") return [promised(query.show)];
	const others = query.show === "to_call" ? sql`c.next_on is null` : sql`not ${isDue}`;
	return [
		promised("due"),
		...turns.map(({ noPhone, tried }) => {
			const those = sql`${others} and ${hasNoPhone} = ${noPhone} and ${wasTriedToday} = ${tried}`;
			return {
				order: { keys: byWorth, direction: "asc" as const },
				read: fewIds ? among(fewIds, those) : byCells(those),
			};
		}),
	];
}
