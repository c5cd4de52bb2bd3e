import { sql } from "kysely";
import { closeEndedGrants, toldDaysBefore } from "./grant-end.server.ts";
import { grantHolds } from "./grant-holds.server.ts";
import { addGrant } from "./grants.server.ts";
import { scopedTransaction, type Trx } from "./scope.server.ts";
import type { Coordinator, Person } from "./viewer.ts";

// Approval of a researcher is for a year. A purpose changes and people move on, so it is looked at again each year.

export type Term = {
	/** Whether access holds now. */
	holds: boolean;
	/** Its last day, past or to come; null where it holds without an end. */
	lastDay: string | null;
	/** The day from which another year can be asked for, early enough for a coordinator to decide; null without an end. */
	renewableFrom: string | null;
	renewable: boolean;
};

/** How long a person's access as a researcher lasts or lasted, or null where there never was any. */
export function findOwnTerm(person: Person): Promise<Term | null> {
	return scopedTransaction({ kind: "none" }, (trx) => findTerm(trx, person.personId));
}

export async function findTerm(trx: Trx, personId: string): Promise<Term | null> {
	const renewableFrom = sql`(g.ends_on - ${toldDaysBefore.researcher}::int)`;
	const row = await selectTerms(trx)
		.select(sql<string | null>`${renewableFrom}::text`.as("renewableFrom"))
		.select(sql<boolean>`coalesce(${renewableFrom} <= auth.network_today(), false)`.as("endsSoon"))
		.where("g.person_id", "=", personId)
		.limit(1)
		.executeTakeFirst();
	if (!row) return null;
	const { endsSoon, ...term } = row;
	return { ...term, renewable: !term.holds || endsSoon };
}

/** Grants of researchers, of each person first the one that holds, else the latest. */
export function selectTerms(trx: Trx) {
	return (
		trx
			.selectFrom("auth.role_grant as g")
			.select(grantHolds("g").as("holds"))
			// What somebody ended by hand ended on that day, whatever had been set.
			.select(
				sql<string | null>`case when g.revoked_by is null then g.ends_on
				else (g.revoked_at at time zone auth.network_time_zone())::date end::text`.as("lastDay"),
			)
			.where("g.role", "=", "researcher")
			.orderBy(grantHolds("g"), "desc")
			.orderBy("g.granted_at", "desc")
	);
}

/**
 * Gives a researcher a year of access, or a year more. One who asked before the end loses no day by it: the year is counted
 * from the last day. Access without a last day stays so.
 */
export async function grantYear(trx: Trx, viewer: Coordinator, personId: string): Promise<void> {
	await closeEndedGrants(trx, personId);
	const { rows } = await sql<{ endsOn: string }>`
		select (auth.network_today() + interval '1 year')::date::text as "endsOn"`.execute(trx);
	const given = await addGrant(trx, {
		personId,
		role: "researcher",
		endsOn: rows[0]!.endsOn,
		grantedBy: viewer.personId,
	});
	if (given !== "held") return;
	await trx
		.updateTable("auth.role_grant")
		.set({
			ends_on: sql<string>`greatest(ends_on, (least(ends_on, auth.network_today() + ${toldDaysBefore.researcher}::int)
				+ interval '1 year')::date)`,
			end_told_at: null,
		})
		.where("person_id", "=", personId)
		.where("role", "=", "researcher")
		.where("revoked_at", "is", null)
		.where("ends_on", "is not", null)
		.execute();
}
