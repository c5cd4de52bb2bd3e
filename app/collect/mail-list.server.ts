import type { Trx } from "#app/auth/scope.server.ts";
import type { MailingFailure, MailKind } from "./survey-mailing.server.ts";

export type Mail = {
	/** An invitation after the first is a new link that somebody asked for. */
	kind: MailKind | "new_link";
	wave: number;
	queuedAt: Date;
	sentAt: Date | null;
	failure: MailingFailure | null;
};

/** What was mailed to these operations for one survey, by operation, oldest first. The caller has narrowed the ids. */
export async function listMails(trx: Trx, surveyId: string, operationIds: string[]): Promise<Map<string, Mail[]>> {
	const rows = await trx
		.selectFrom("collect.mailing")
		.select(["operation_id", "kind", "wave", "queued_at", "sent_at", "failure"])
		.where("survey_id", "=", surveyId)
		.where((eb) => eb("operation_id", "=", eb.fn.any(eb.val(operationIds))))
		.orderBy("queued_at")
		.orderBy("mailing_id")
		.execute();
	const byOperation = new Map<string, Mail[]>();
	for (const { operation_id, kind, wave, queued_at, sent_at, failure } of rows) {
		const mail = {
			kind: (kind === "invitation" && wave > 1 ? "new_link" : kind) as Mail["kind"],
			wave,
			queuedAt: queued_at,
			sentAt: sent_at,
			failure: failure as MailingFailure | null,
		};
		byOperation.set(operation_id, [...(byOperation.get(operation_id) ?? []), mail]);
	}
	return byOperation;
}
