import { askToSendIn, awaitsReceipt, emptyOutbox, listUnsettled, settle } from "#app/collect/outbox.ts";
import { tellHalfTypedDays } from "#app/lib/half-typed-days.ts";
import { listenForLeaving } from "./ask-leaving.ts";
import { startAskPage } from "./ask-page.ts";
import { openPageStore } from "./leaving-note.ts";
import { keepPack } from "./pack.ts";
import { type BegunPage, type PageData, readPage } from "./page-data.ts";
import { startPhotoPage } from "./photos/photo-page.ts";
import { startRefusedPage } from "./refused-page.ts";
import { startReviewPage } from "./review-page.ts";
import { isReadyToSendIn, receiptOf, reviewOf } from "./send-in.ts";
import { change, sendWaiting } from "./send.ts";
import { sendPhotos } from "./send-photos.ts";
import type { Held, PhoneStore } from "./store.ts";

/*
 * The script of a grower's pages, which work without it: it keeps what is typed, on the phone and at the server, and says so.
 * The pages are drawn by the server and carry no other script.
 */
tellHalfTypedDays(document);
void start();
// A page that the browser put away and took out again shows what was true then.
window.addEventListener("pageshow", (event) => event.persisted && location.reload());
document.querySelector<HTMLElement>("[role=alert][tabindex='-1']")?.focus();

async function start(): Promise<void> {
	const page = readPage();
	const store = await openPageStore();
	if (!page) {
		await startRefusedPage(store);
		return;
	}
	await forgetOthers(store, page);
	if (page.responseId === null || page.told === null) return;
	const begun = { ...page, responseId: page.responseId, told: page.told };
	if (page.stage === "receipt") {
		// All is at the server and in the receipt; the phone keeps no copy, but of a photo that came too late for it.
		await store.change(begun.responseId, withPhotosOnly);
		await store.dropPack(begun.responseId);
		return;
	}
	await startStage(store, begun);
	window.setTimeout(() => void prepareForNoSignal(store, page), 500);
	window.addEventListener("online", () => void sendPhotos(store, begun.responseId, () => {}));
	await sendInWhereAsked(store, begun.responseId);
}

function withPhotosOnly(held: Held | undefined): Held | undefined {
	const photos = held?.outbox.photos ?? [];
	return held && photos.length > 0 ? { ...held, outbox: { ...emptyOutbox, photos } } : undefined;
}

async function startStage(store: PhoneStore, page: BegunPage): Promise<void> {
	const form = document.querySelector<HTMLFormElement>("form[data-answering]");
	const { stepKey } = page;
	if (page.stage === "ask" && form && stepKey !== undefined) {
		const ask = await startAskPage(store, { ...page, stepKey }, form);
		listenForLeaving(ask);
		// A part of this script: one that came later would never come where the signal goes meanwhile.
		if (form.querySelector("input[type=file]")) await startPhotoPage(ask);
		goOnWhereAsked(form);
	} else if (page.stage === "review" && form) {
		await startReviewPage(store, page, form);
		goOnWhereAsked(form);
	} else {
		await change(store, page.responseId, (outbox) => settle(outbox, page.told.changes));
	}
}

/** What was sent in without signal is sent in now, by the page that can say what is missing. */
async function sendInWhereAsked(store: PhoneStore, responseId: string): Promise<void> {
	await sendWaiting(store, responseId, () => {});
	await sendPhotos(store, responseId, () => {});
	const held = await store.read(responseId);
	// The worker sent them in while this page was on its way.
	if (held && awaitsReceipt(held.outbox)) location.replace(receiptOf(held));
	if (!isReadyToSendIn(held)) return;
	await change(store, responseId, (outbox) => askToSendIn(outbox, false));
	location.assign(`${reviewOf(held)}#continue`);
	// On the page itself only the hash changes, and nothing is loaded.
	if (location.pathname === reviewOf(held)) location.reload();
}

/** Signal was lost when a form was sent, and is back: it is sent again, as the button was pressed already. */
function goOnWhereAsked(form: HTMLFormElement): void {
	if (location.hash !== "#continue") return;
	history.replaceState(null, "", location.pathname + location.search);
	form.requestSubmit(form.querySelector<HTMLButtonElement>("button[data-on]"));
}

/** Takes along what the survey's pages are drawn from, and the worker that draws them, unless data is to be saved. */
async function prepareForNoSignal(store: PhoneStore, page: PageData): Promise<void> {
	const { connection } = navigator as { connection?: { saveData?: boolean } };
	if (connection?.saveData || !store.lasting()) return;
	await keepPack(store, page);
	if (import.meta.env.PROD) await navigator.serviceWorker?.register("/answer/worker.js");
}

/**
 * Of what was typed in somebody else's session the phone holds only what the server still lacks, until its own link is opened
 * again; no page of this session shows it, nor can any be drawn.
 */
async function forgetOthers(store: PhoneStore, { holder, responseId }: PageData): Promise<void> {
	for (const pack of await store.listPacks()) {
		if (pack.holder !== holder && pack.responseId !== responseId) await store.dropPack(pack.responseId);
	}
	for (const other of await store.list()) {
		if (other.holder === holder) continue;
		await store.change(other.responseId, (held) => {
			if (!held || other.responseId === responseId) return held && { ...held, holder };
			return listUnsettled(held.outbox).length > 0 ? held : undefined;
		});
	}
}
