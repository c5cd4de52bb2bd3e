import { awaitsReceipt } from "#app/collect/outbox.ts";
import { isReadyToSendIn, receiptOf, reviewOf } from "../send-in.ts";
import { askToSendLater } from "../send-later.ts";
import { sendPhotos } from "../send-photos.ts";
import { sendWaiting } from "../send.ts";
import type { Pack } from "../pack.ts";
import { here, setReachable } from "./here.ts";

const pause = 20_000;

/**
 * Looks for the server, and sends what waits as soon as it answers. The page then stays as it is, for somebody may be typing
 * in it; going on from it leads to the server's own. Answers that were sent in are followed to their receipt.
 */
export function watchForSignal(pack: Pack): void {
	const look = async () => {
		const answer = navigator.onLine ? await fetch("/healthz", { cache: "no-store" }).catch(() => null) : null;
		setReachable(answer?.ok ?? false);
		if (!here.reachable) return;
		await sendWaiting(here.store, pack.responseId, () => {});
		await sendPhotos(here.store, pack.responseId, () => {});
		const held = await here.store.read(pack.responseId);
		// The worker was quicker, and nothing is left to send.
		if (held && awaitsReceipt(held.outbox)) location.replace(receiptOf(held));
		else if (isReadyToSendIn(held)) location.replace(reviewOf(held));
	};
	window.addEventListener("online", () => void look());
	window.addEventListener("offline", () => void look());
	window.setInterval(() => void look(), pause);
	askToSendLater();
}
