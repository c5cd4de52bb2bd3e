import { sql } from "kysely";
import type { Trx } from "./scope.server.ts";

/**
 * Ends every grant for an operation that leaves, and the sessions of its personal links. People who had an account for
 * nothing else are forgotten: no name, no address, no subject by which they would be known again, and no session.
 * @returns the ids of these people.
 */
export async function forgetGrantees(trx: Trx, operationId: string): Promise<string[]> {
	const grants = await trx
		.updateTable("auth.role_grant")
		.set({ revoked_at: sql`coalesce(revoked_at, now())` })
		.where("operation_id", "=", operationId)
		.returning("person_id")
		.execute();
	await trx
		.deleteFrom("auth.session")
		.where("personal_link_id", "in", (eb) =>
			eb.selectFrom("collect.personal_link").select("personal_link_id").where("operation_id", "=", operationId),
		)
		.execute();
	const ids = grants.map(({ person_id }) => person_id);
	const forgotten = await trx
		.updateTable("auth.person as p")
		.set({ display_name: "", email: null, language: null, forgotten_at: sql`now()` })
		.set({ subject: sql`'forgotten:' || gen_random_uuid()` })
		.where((eb) => eb("p.person_id", "=", eb.fn.any(eb.val(ids))))
		// Whoever holds another grant, or ever worked here or asked for data, has an account for that too.
		.where(
			sql<boolean>`not exists (select from auth.role_grant g where g.person_id = p.person_id
				and (g.role <> 'grower' or auth.grant_holds(g.revoked_at, g.ends_on)))
			and not exists (select from auth.access_request a where a.person_id = p.person_id)`,
		)
		.returning("p.person_id")
		.execute();
	const gone = forgotten.map(({ person_id }) => person_id);
	await trx
		.deleteFrom("auth.session")
		.where((eb) => eb("person_id", "=", eb.fn.any(eb.val(gone))))
		.execute();
	return gone;
}
