import { listUnsettled, markSentIn } from "#app/collect/outbox.ts";
import { change } from "./send.ts";
import type { Held, PhoneStore } from "./store.ts";

/** Where the answers are looked over and sent in. */
export function reviewOf({ surveyId, operationId }: Pick<Held, "surveyId" | "operationId">): string {
	return `/answer/${surveyId}/${operationId}/review`;
}

/** What is shown of answers that were sent in. */
export function receiptOf({ surveyId, operationId }: Pick<Held, "surveyId" | "operationId">): string {
	return `/answer/${surveyId}/${operationId}/receipt`;
}

/** Whether the grower has sent the answers in without signal, and all of them have reached the server since. */
export function isReadyToSendIn(held: Held | undefined): held is Held {
	return held !== undefined && held.outbox.sendIn && listUnsettled(held.outbox).length === 0;
}

/**
 * Sends in what the grower has sent in without signal. A redirect is the server's yes; anything else is left for a page, which
 * can show what is missing.
 */
export async function sendIn(store: PhoneStore, responseId: string): Promise<void> {
	const held = await store.read(responseId);
	if (!isReadyToSendIn(held)) return;
	const answer = await fetch(reviewOf(held), { method: "POST", redirect: "manual" }).catch(() => null);
	if (answer?.type === "opaqueredirect") await change(store, responseId, markSentIn);
}
