import { listUnsettled, nextToSend, settle } from "#app/collect/outbox.ts";
import { nextPhoto } from "#app/collect/photos-here.ts";
import { versionOf } from "#app/collect/step-change.ts";
import type { BegunPage } from "./page-data.ts";
import { change, sendWaiting } from "./send.ts";
import { sendPhotos } from "./send-photos.ts";
import type { Held, PhoneStore } from "./store.ts";

/** The page shows what the server has: what the phone still holds is sent first, and named where it cannot be. */
export async function startReviewPage(store: PhoneStore, page: BegunPage, form: HTMLFormElement): Promise<void> {
	const held = await change(store, page.responseId, (outbox) => settle(outbox, page.told.changes));
	const hadMore = held !== undefined && nextToSend(held.outbox) !== undefined;
	const hadPhotos = held !== undefined && nextPhoto(held.outbox) !== undefined;
	form.addEventListener("submit", (event) => void sendIn(store, page, event));
	const outcome = hadMore ? await sendWaiting(store, page.responseId, () => {}) : null;
	await sayUnsettled(store, page);
	const photos = hadPhotos ? await sendPhotos(store, page.responseId, () => {}) : null;
	const hasTyped = (outcome === "sent" || outcome === "late") && hasNews(await store.read(page.responseId), page);
	if (hasTyped || photos === "sent") location.reload();
	else await sayUnsettled(store, page);
}

/** Whether the server took something that the page does not show yet; a screen that was passed by holds nothing new. */
function hasNews(held: Held | undefined, { told }: BegunPage): boolean {
	return Object.entries(held?.outbox.steps ?? {}).some(([key, step]) => step.seen > versionOf(told.changes, key));
}

/** Sends the answers in when all that was typed is among them. */
async function sendIn(store: PhoneStore, page: BegunPage, event: SubmitEvent): Promise<void> {
	event.preventDefault();
	const { target, submitter } = event;
	if (submitter?.getAttribute("aria-disabled") === "true") return;
	submitter?.setAttribute("aria-disabled", "true");
	await sendWaiting(store, page.responseId, () => {});
	await sayUnsettled(store, page);
	await sendPhotos(store, page.responseId, () => {});
	if (await sayUnsettled(store, page)) submitter?.removeAttribute("aria-disabled");
	else (target as HTMLFormElement).submit();
}

/** Names the screens whose newest answers are on this phone only. @returns whether there are any. */
async function sayUnsettled(store: PhoneStore, page: BegunPage): Promise<boolean> {
	const held = await store.read(page.responseId);
	const unsettled = held ? listUnsettled(held.outbox) : [];
	const place = document.getElementById("kept-word");
	if (place) {
		const names = unsettled.map((key) => page.labels[key] ?? key).join("; ");
		place.textContent = unsettled.length > 0 ? page.words.unsent.replace("{{names}}", names) : "";
	}
	return unsettled.length > 0;
}
