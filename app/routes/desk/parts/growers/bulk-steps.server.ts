import { z } from "zod";
import type { Trx } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { sendInvitations, sendReminders } from "#app/collect/invitations.server.ts";
import { tryAnew } from "#app/collect/reach.server.ts";
import type { ToastData } from "#app/components/shell-data.ts";
import { setLanguages } from "#app/directory/operation-languages.server.ts";

const mark = z.string();
/** What can be done with chosen growers at once. `mark` says which growers the page counted. */
export const BulkStep = z.discriminatedUnion("step", [
	z.object({ step: z.literal("language"), mark, language: z.enum(["en", "es"]) }),
	z.object({ step: z.literal("try_anew"), mark }),
	z.object({ step: z.literal("invite"), mark, surveyId: z.guid() }),
	z.object({ step: z.literal("remind"), mark, surveyId: z.guid(), wave: z.coerce.number().int().min(1) }),
]);
export type BulkStep = z.infer<typeof BulkStep>;

/** Does one step with all of them, in the caller's transaction: with all or with none. */
export async function actOnGrowers(
	trx: Trx,
	viewer: Associate,
	operationIds: string[],
	step: BulkStep,
): Promise<"not_found" | "not_open" | { toast: ToastData }> {
	switch (step.step) {
		case "language":
			return told("language", await setLanguages(trx, viewer, operationIds, step.language));
		case "try_anew":
			return told("tryAnew", await tryAnew(trx, viewer, operationIds));
		case "invite":
			return queued(await sendInvitations(trx, viewer, step.surveyId, operationIds));
		case "remind":
			return queued(await sendReminders(trx, viewer, step.surveyId, step.wave, operationIds));
	}
}

function queued(outcome: "not_found" | "not_open" | { queued: number }) {
	return typeof outcome === "string" ? outcome : told("mails", outcome.queued);
}

function told(what: "language" | "tryAnew" | "mails", count: number): { toast: ToastData } {
	return { toast: { key: `growers:bulk.toast.${what}`, values: { count } } };
}
