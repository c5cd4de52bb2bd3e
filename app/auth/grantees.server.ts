import { grantHolds } from "./grant-holds.server.ts";
import type { Trx } from "./scope.server.ts";

/** Who signs in for an operation, by name. The caller has found it. */
export async function listGrantees(trx: Trx, operationId: string) {
	return trx
		.selectFrom("auth.role_grant as g")
		.innerJoin("auth.person as p", "p.person_id", "g.person_id")
		.where("g.operation_id", "=", operationId)
		.where(grantHolds("g"))
		.select(["p.person_id as personId", "p.display_name as name", "p.email", "g.granted_at as since"])
		.orderBy("p.display_name")
		.orderBy("p.person_id")
		.execute();
}
export type Grantee = Awaited<ReturnType<typeof listGrantees>>[number];
