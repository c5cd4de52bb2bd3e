import type { LogAction } from "./log-actions.ts";
import type { Trx } from "./scope.server.ts";

export type NewEvent = {
	personId: string | null;
	action: LogAction;
	subjectKind: string;
	subjectId: string;
	stateFips?: string | null;
	/** What a reader of the log needs; never an answer, a token or an address. */
	detail?: Record<string, unknown>;
};

/** Writes who did what to which thing, in the transaction that does it. The table takes no update and no delete. */
export async function logEvent(trx: Trx, event: NewEvent): Promise<void> {
	await trx
		.insertInto("log.event")
		.values({
			person_id: event.personId,
			action: event.action,
			subject_kind: event.subjectKind,
			subject_id: event.subjectId,
			state_fips: event.stateFips ?? null,
			detail: JSON.stringify(event.detail ?? {}),
		})
		.execute();
}
