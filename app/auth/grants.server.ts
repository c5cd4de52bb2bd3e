import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "./event-log.server.ts";
import { closeEndedGrants, lastDay, lastDayProblem, lockBesideCoordinators } from "./grant-end.server.ts";
import { grantHolds } from "./grant-holds.server.ts";
import { type Trx, underScope } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

export const GrantForm = z.discriminatedUnion("step", [
	z.object({
		step: z.literal("grant"),
		personId: z.uuid("choice_wrong"),
		role: z.enum(["associate", "grower", "coordinator", "researcher"], { error: "choice_wrong" }),
		/** Read for associates only, whose grant is for one state. */
		stateFips: z
			.string()
			.regex(/^\d{2}$/, "choice_wrong")
			.optional(),
		/** Read for growers only: the operation's id, or its e-mail address where no other has the same. */
		operation: z.string().trim().max(254, "too_long").optional(),
		endsOn: lastDay,
	}),
	z.object({ step: z.literal("revoke"), roleGrantId: z.uuid("choice_wrong") }),
]);
type NewGrant = Extract<z.infer<typeof GrantForm>, { step: "grant" }>;

/** Everybody who has signed in, with the grants that hold, by name. */
export async function listPeople(trx: Trx, _viewer: Coordinator) {
	const people = await trx
		.selectFrom("auth.person")
		.select(["person_id as personId", "display_name as displayName", "email"])
		.where("forgotten_at", "is", null)
		.orderBy("display_name")
		.orderBy("person_id")
		.execute();
	const grants = await trx
		.selectFrom("auth.role_grant as g")
		.select([
			"role_grant_id as roleGrantId",
			"person_id as personId",
			"role",
			"state_fips as stateFips",
			"operation_id as operationId",
			sql<string | null>`ends_on::text`.as("endsOn"),
		])
		.where(grantHolds("g"))
		.orderBy("role")
		.orderBy("state_fips")
		.execute();
	const names = await operationNames(
		trx,
		grants.flatMap((grant) => grant.operationId ?? []),
	);
	return people.map(({ personId, displayName, email }) => ({
		personId,
		displayName,
		email,
		grants: grants
			.filter((grant) => grant.personId === personId)
			.map((grant) => ({ ...grant, operationName: names.get(grant.operationId ?? "") ?? null })),
	}));
}

/**
 * A coordinator, who holds no state, grants for operations and so must be told which they are; nothing else of the
 * directory comes out.
 */
async function operationNames(trx: Trx, ids: string[]): Promise<Map<string, string>> {
	if (ids.length === 0) return new Map();
	const rows = await underScope(trx, { kind: "network" }, () =>
		trx
			.selectFrom("directory.operation")
			.select(["operation_id", "name"])
			.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(ids))))
			.execute(),
	);
	return new Map(rows.map((row) => [row.operation_id, row.name]));
}

/** The one operation that an id or an e-mail address names. */
async function findOperationNamed(trx: Trx, idOrEmail: string) {
	const isId = z.guid().safeParse(idOrEmail).success;
	const rows = await underScope(trx, { kind: "network" }, () =>
		trx
			.selectFrom("directory.operation")
			.select(["operation_id", "state_fips"])
			.where((eb) =>
				isId ? eb("operation_id", "=", idOrEmail) : eb(eb.fn("lower", ["email"]), "=", idOrEmail.toLowerCase()),
			)
			.limit(2)
			.execute(),
	);
	if (rows.length > 1) return "operation_several" as const;
	return rows[0] ?? ("operation_unknown" as const);
}

export async function listStates(trx: Trx): Promise<string[]> {
	const rows = await trx.selectFrom("directory.state").select("state_fips").orderBy("state_fips").execute();
	return rows.map((row) => row.state_fips);
}

/** Grants a role once: the same grant again changes nothing. A state or an operation that is not there is refused. */
export async function grantRole(trx: Trx, viewer: Coordinator, grant: NewGrant) {
	const person = await trx
		.selectFrom("auth.person")
		.select("person_id")
		.where("person_id", "=", grant.personId)
		.executeTakeFirst();
	if (!person) return "not_found" as const;
	const place = await placeOf(trx, grant);
	if (typeof place === "string") return place;
	const problem = await lastDayProblem(trx, grant.endsOn);
	if (problem) return problem;
	const { personId, role, endsOn } = grant;
	const added = await addGrant(trx, { personId, role, ...place.for, endsOn, grantedBy: viewer.personId });
	if (added !== "added") return added === "held_so" ? ("granted" as const) : ("already_held" as const);
	await logEvent(trx, {
		personId: viewer.personId,
		action: "grant.given",
		subjectKind: "person",
		subjectId: grant.personId,
		stateFips: place.stateFips,
		detail: { role: grant.role },
	});
	return "granted" as const;
}

type AddedGrant = {
	personId: string;
	role: NewGrant["role"];
	stateFips?: string | null;
	operationId?: string | null;
	endsOn?: string | null | undefined;
	grantedBy: string;
};

/**
 * Adds a grant unless the same holds already, whose last day is then left as it is. Logging is the caller's.
 * @returns `held_so` where it holds with this very last day, `held` where with another.
 */
export async function addGrant(trx: Trx, { personId, role, grantedBy, ...more }: AddedGrant) {
	const endsOn = more.endsOn ?? null;
	const place = { state_fips: more.stateFips ?? null, operation_id: more.operationId ?? null };
	// One that has ended by itself and is not noted yet would stand in the way.
	await closeEndedGrants(trx, personId);
	const row = await trx
		.insertInto("auth.role_grant")
		.values({ person_id: personId, role, ...place, ends_on: endsOn, granted_by: grantedBy })
		.onConflict((conflict) => conflict.doNothing())
		.returning("role_grant_id")
		.executeTakeFirst();
	if (row) return "added" as const;
	const held = await trx
		.selectFrom("auth.role_grant")
		.select(sql<string | null>`ends_on::text`.as("endsOn"))
		.where("person_id", "=", personId)
		.where("role", "=", role)
		.where("state_fips", "is not distinct from", place.state_fips)
		.where("operation_id", "is not distinct from", place.operation_id)
		.where("revoked_at", "is", null)
		.executeTakeFirst();
	return held?.endsOn === endsOn ? ("held_so" as const) : ("held" as const);
}

/** What a grant is for: an associate's state, a grower's operation, for others the whole network. */
async function placeOf(trx: Trx, { role, stateFips, operation }: NewGrant) {
	if (role === "associate") {
		if (!stateFips || !(await listStates(trx)).includes(stateFips)) return "state_needed" as const;
		return { for: { stateFips }, stateFips };
	}
	if (role !== "grower") return { for: {}, stateFips: null };
	if (!operation) return "operation_needed" as const;
	const found = await findOperationNamed(trx, operation);
	if (typeof found === "string") return found;
	return { for: { operationId: found.operation_id }, stateFips: found.state_fips };
}

/** Ends a grant at once. The last coordinator's without a last day stays, since nobody could give it back. */
export async function revokeGrant(trx: Trx, viewer: Coordinator, roleGrantId: string) {
	const { grant, anotherStays } = await lockBesideCoordinators(trx, roleGrantId);
	if (!grant) return "not_found" as const;
	if (grant.role === "coordinator" && grant.ends_on === null && !anotherStays) return "last_coordinator" as const;
	await trx
		.updateTable("auth.role_grant")
		.set({ revoked_at: new Date(), revoked_by: viewer.personId })
		.where("role_grant_id", "=", roleGrantId)
		.execute();
	await logEvent(trx, {
		personId: viewer.personId,
		action: "grant.revoked",
		subjectKind: "person",
		subjectId: grant.person_id,
		stateFips: grant.state_fips,
		detail: { role: grant.role },
	});
	return "revoked" as const;
}
