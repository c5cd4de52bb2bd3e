import { sql } from "kysely";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { countedTo, countRows, pageByParts } from "#app/lib/page-by-key.server.ts";
import { callParts, isPromised, isSoughtBy, promisedTo, waitedFor } from "./call-parts.server.ts";
import type { CallQuery, ContactOutcome } from "./contacts.schema.ts";
import type { Disposition } from "./frame-list.server.ts";

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
	const { few, ...count } = await countCalls(trx, viewer, surveyId, query);
	const parts = callParts(trx, viewer, { surveyId, query, cells, few });
	const page = await pageByParts(parts, query, pageSize);
	const cellOf = new Map(cells.map((cell) => [`${cell.countyFips} ${cell.stratumKey}`, cell]));
	const rows = page.rows.map(({ countyFips, stratumKey, ...row }): CallRow => {
		const here = cellOf.get(`${countyFips} ${stratumKey}`);
		return { ...row, answeredHere: here?.answered ?? 0, askedHere: here?.frameSize ?? 0, share: here?.share ?? 0 };
	});
	return { ...page, rows, ...count };
}

/** How many calls match, and who is sought where that is few: read for the count, they need not be looked for again. */
async function countCalls(trx: Trx, viewer: Associate, surveyId: string, query: CallQuery) {
	const frame = sql`${waitedFor(viewer, surveyId)} and ${isSoughtBy(query)}`;
	if (query.show === "due" || query.show === "later") {
		const { show } = query;
		const count = await countRows(
			trx,
			(most) => sql`(select from (${promisedTo[show](surveyId)}) p cross join lateral (
				select from ${frame} and f.operation_id = p.operation_id and ${isPromised[show]}) w limit ${most})`,
		);
		return { ...count, few: null };
	}
	const shown = query.show === "to_call" ? sql`(c.next_on is null or ${isPromised.due})` : sql`true`;
	if (query.q === "")
		return { ...(await countRows(trx, (most) => sql`(select from ${frame} and ${shown} limit ${most})`)), few: null };
	const { rows } = await sql<{ id: string }>`
		select f.operation_id as id from ${frame} and ${shown} limit ${countedTo + 1}`.execute(trx);
	const moreThanTotal = rows.length > countedTo;
	return {
		total: Math.min(rows.length, countedTo),
		moreThanTotal,
		few: moreThanTotal ? null : rows.map(({ id }) => id),
	};
}

/** How many calls were promised for today, or for a day that has gone by, looked at one by one and not in the whole frame. */
export async function countDueCalls(trx: Trx, viewer: Associate, surveyId: string): Promise<number> {
	const { rows } = await sql<{ due: number }>`
		with promised as materialized (${promisedTo.due(surveyId)})
		select count(*)::int as due from promised p cross join lateral (
			select from ${waitedFor(viewer, surveyId)} and f.operation_id = p.operation_id and ${isPromised.due} limit 1) due`.execute(
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
