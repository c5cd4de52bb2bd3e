import { scopedTransaction } from "#app/auth/scope.server.ts";
import { queueThanks } from "#app/collect/thanks.server.ts";

/** Queues the thank-yous of a survey whose figures were published. */
export async function thankGrowers({ releaseDraftId }: { releaseDraftId: string }): Promise<void> {
	await scopedTransaction({ kind: "network" }, (trx) => queueThanks(trx, releaseDraftId));
}
