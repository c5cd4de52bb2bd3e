import type { Trx } from "#app/auth/scope.server.ts";

/** What is logged while the demo is made happened when the demo says. Only the database's owner can do this. */
export async function moveLog(trx: Trx, subjectId: string, happenedAt: Date, action?: string): Promise<void> {
	await trx
		.updateTable("log.event")
		.set({ happened_at: happenedAt })
		.where("subject_id", "=", subjectId)
		.$if(action !== undefined, (query) => query.where("action", "=", action!))
		.execute();
}
