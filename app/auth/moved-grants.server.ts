import type { Trx } from "./scope.server.ts";

/** Whoever signs in for one operation signs in for another instead, unless they do so already. @returns the grants moved. */
export async function moveGrants(trx: Trx, fromId: string, toId: string): Promise<string[]> {
	const moved = await trx
		.updateTable("auth.role_grant as g")
		.set({ operation_id: toId })
		.where("g.operation_id", "=", fromId)
		.where("g.revoked_at", "is", null)
		.where(({ not, exists, selectFrom }) =>
			not(
				exists(
					selectFrom("auth.role_grant as k")
						.select("k.role_grant_id")
						.whereRef("k.person_id", "=", "g.person_id")
						.where("k.operation_id", "=", toId)
						.where("k.revoked_at", "is", null),
				),
			),
		)
		.returning("g.role_grant_id")
		.execute();
	return moved.map(({ role_grant_id }) => role_grant_id);
}

/** Moves these grants back; one that was revoked since goes back revoked. */
export async function moveGrantsBack(trx: Trx, grantIds: string[], toId: string): Promise<void> {
	await trx
		.updateTable("auth.role_grant")
		.set({ operation_id: toId })
		.where((eb) => eb("role_grant_id", "=", eb.fn.any(eb.val(grantIds))))
		.execute();
}
