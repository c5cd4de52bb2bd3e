import { z } from "zod";
import { logEvent } from "./event-log.server.ts";
import type { Trx } from "./scope.server.ts";
import type { Coordinator } from "./viewer.ts";

export const GrantForm = z.discriminatedUnion("step", [
	z.object({
		step: z.literal("grant"),
		personId: z.uuid("choice_wrong"),
		role: z.enum(["associate", "coordinator", "researcher"], { error: "choice_wrong" }),
		/** Read for associates only, whose grant is for one state. */
		stateFips: z
			.string()
			.regex(/^\d{2}$/, "choice_wrong")
			.optional(),
	}),
	z.object({ step: z.literal("revoke"), roleGrantId: z.uuid("choice_wrong") }),
]);
type NewGrant = Extract<z.infer<typeof GrantForm>, { step: "grant" }>;

/** Everybody who has signed in, with the grants that hold, by name. */
export async function listPeople(trx: Trx, _viewer: Coordinator) {
	const people = await trx
		.selectFrom("auth.person")
		.select(["person_id as personId", "display_name as displayName", "email"])
		.orderBy("display_name")
		.orderBy("person_id")
		.execute();
	const grants = await trx
		.selectFrom("auth.role_grant")
		.select(["role_grant_id as roleGrantId", "person_id as personId", "role", "state_fips as stateFips"])
		.where("revoked_at", "is", null)
		.orderBy("role")
		.orderBy("state_fips")
		.execute();
	return people.map(({ personId, displayName, email }) => ({
		personId,
		displayName,
		email,
		grants: grants.filter((grant) => grant.personId === personId),
	}));
}

export async function listStates(trx: Trx): Promise<string[]> {
	const rows = await trx.selectFrom("directory.state").select("state_fips").orderBy("state_fips").execute();
	return rows.map((row) => row.state_fips);
}

/** Grants a role once: the same grant again changes nothing. A state that the network does not cover is refused. */
export async function grantRole(trx: Trx, viewer: Coordinator, grant: NewGrant) {
	const person = await trx
		.selectFrom("auth.person")
		.select("person_id")
		.where("person_id", "=", grant.personId)
		.executeTakeFirst();
	if (!person) return "not_found" as const;
	const stateFips = grant.role === "associate" ? (grant.stateFips ?? null) : null;
	if (grant.role === "associate" && (!stateFips || !(await listStates(trx)).includes(stateFips)))
		return "state_needed" as const;
	const row = await trx
		.insertInto("auth.role_grant")
		.values({ person_id: grant.personId, role: grant.role, state_fips: stateFips, granted_by: viewer.personId })
		.onConflict((conflict) => conflict.doNothing())
		.returning("role_grant_id")
		.executeTakeFirst();
	if (!row) return "granted" as const;
	await logEvent(trx, {
		personId: viewer.personId,
		action: "grant.given",
		subjectKind: "person",
		subjectId: grant.personId,
		stateFips,
		detail: { role: grant.role },
	});
	return "granted" as const;
}

/** Ends a grant at once. The last coordinator's stays, since nobody could give it back. */
export async function revokeGrant(trx: Trx, viewer: Coordinator, roleGrantId: string) {
	const held = await trx
		.selectFrom("auth.role_grant")
		.select(["role_grant_id", "person_id", "role", "state_fips"])
		.where("revoked_at", "is", null)
		.where((eb) => eb.or([eb("role_grant_id", "=", roleGrantId), eb("role", "=", "coordinator")]))
		.forUpdate()
		.execute();
	const grant = held.find((row) => row.role_grant_id === roleGrantId);
	if (!grant) return "not_found" as const;
	if (grant.role === "coordinator" && held.filter((row) => row.role === "coordinator").length === 1)
		return "last_coordinator" as const;
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
