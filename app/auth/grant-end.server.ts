import { sql } from "kysely";
import { z } from "zod";
import { optionalField } from "#app/lib/number-field.ts";
import { logEvent } from "./event-log.server.ts";
import { grantHolds } from "./grant-holds.server.ts";
import { readNetworkClock } from "./network-clock.server.ts";
import type { Trx } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

/** So many days before its last one, a grant's person is told by mail: in time to ask anew where that must be decided. */
export const toldDaysBefore = { researcher: 30, others: 7 } as const;

/** A grant's last day as typed; left empty there is none. */
export const lastDay = optionalField(z.iso.date("date_wrong"));
export const GrantEndForm = z.object({ endsOn: lastDay });

/** What is wrong with a last day: it must not be over, nor so far off that it was mistyped. */
export async function lastDayProblem(trx: Trx, endsOn: string | null | undefined) {
	if (!endsOn) return undefined;
	const { today } = await readNetworkClock(trx);
	if (endsOn < today) return "end_past" as const;
	return Number(endsOn.slice(0, 4)) > Number(today.slice(0, 4)) + 10 ? ("end_far" as const) : undefined;
}

/**
 * Locks the grants by which somebody is coordinator now, and one more.
 * @returns the grant, unless it does not hold, and whether another coordinator's has no last day.
 */
export async function lockBesideCoordinators(trx: Trx, roleGrantId: string) {
	const held = await trx
		.selectFrom("auth.role_grant as g")
		.select([
			"g.role_grant_id",
			"g.person_id",
			"g.role",
			"g.state_fips",
			sql<string | null>`g.ends_on::text`.as("ends_on"),
		])
		.where(grantHolds("g"))
		.where((eb) => eb.or([eb("g.role_grant_id", "=", roleGrantId), eb("g.role", "=", "coordinator")]))
		.orderBy("g.role_grant_id")
		.forUpdate()
		.execute();
	const grant = held.find((row) => row.role_grant_id === roleGrantId);
	const others = held.filter((row) => row.role === "coordinator" && row.role_grant_id !== roleGrantId);
	// One that ends by itself would leave nobody who could give the role again.
	return { grant, anotherStays: others.some((row) => row.ends_on === null) };
}

/** Sets or takes away the last day of a grant that holds. There is always a coordinator whose grant has none. */
export async function setGrantEnd(trx: Trx, viewer: Coordinator, roleGrantId: string, endsOn: string | null) {
	const { grant, anotherStays } = await lockBesideCoordinators(trx, roleGrantId);
	if (!grant) return "not_found" as const;
	const problem = await lastDayProblem(trx, endsOn);
	if (problem) return problem;
	if (endsOn && grant.role === "coordinator" && !anotherStays) return "last_coordinator" as const;
	if (grant.ends_on === endsOn) return "end_set" as const;
	await trx
		.updateTable("auth.role_grant")
		.set({ ends_on: endsOn, end_told_at: null })
		.where("role_grant_id", "=", roleGrantId)
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "grant.end_set",
		subjectKind: "person",
		subjectId: grant.person_id,
		stateFips: grant.state_fips,
		detail: { role: grant.role, endsOn },
	});
	return "end_set" as const;
}

/**
 * Notes of grants whose last day is over that they have ended, with the moment in which they did: at the end of that day.
 * They have held no more since. @param personId of one person alone.
 */
export async function closeEndedGrants(trx: Trx, personId?: string): Promise<number> {
	const ended = await trx
		.updateTable("auth.role_grant as g")
		.set({ revoked_at: sql<Date>`(g.ends_on + 1)::timestamp at time zone auth.network_time_zone()` })
		.where("g.revoked_at", "is", null)
		.where("g.ends_on", "<", sql<string>`auth.network_today()`)
		.$if(personId !== undefined, (query) => query.where("g.person_id", "=", personId!))
		.returning(["g.person_id", "g.role", "g.state_fips"])
		.execute();
	for (const { person_id, role, state_fips } of ended)
		await logEvent(trx, {
			personId: null,
			action: "grant.ended",
			subjectKind: "person",
			subjectId: person_id,
			stateFips: state_fips,
			detail: { role },
		});
	return ended.length;
}

/** Takes the grants whose people are now to be told of the end, each once for each day that was set. */
export async function takeEndsToTell(trx: Trx): Promise<string[]> {
	const rows = await trx
		.updateTable("auth.role_grant as g")
		.from("auth.person as p")
		.set({ end_told_at: sql<Date>`now()` })
		.whereRef("p.person_id", "=", "g.person_id")
		.where("p.email", "is not", null)
		.where(grantHolds("g"))
		.where("g.end_told_at", "is", null)
		.where(
			"g.ends_on",
			"<=",
			sql<string>`auth.network_today() + case g.role when 'researcher' then ${toldDaysBefore.researcher}::int
				else ${toldDaysBefore.others}::int end`,
		)
		.returning("g.role_grant_id")
		.execute();
	return rows.map(({ role_grant_id }) => role_grant_id);
}

/** A grant with its person, whether it has ended or not. */
export async function findGrant(trx: Trx, roleGrantId: string) {
	return trx
		.selectFrom("auth.role_grant as g")
		.innerJoin("auth.person as p", "p.person_id", "g.person_id")
		.leftJoin("auth.person as b", "b.person_id", "g.granted_by")
		.select([
			"g.role_grant_id as roleGrantId",
			"g.role",
			"g.state_fips as stateFips",
			"g.granted_at as grantedAt",
			"b.display_name as grantedBy",
			"p.display_name as name",
			"p.email",
			"p.language",
			sql<string | null>`g.ends_on::text`.as("endsOn"),
			grantHolds("g").as("holds"),
		])
		.where("g.role_grant_id", "=", roleGrantId)
		.executeTakeFirst();
}
