import { listUnsettled, settle } from "#app/collect/outbox.ts";
import { startAskPage } from "./ask-page.ts";
import { type PageData, readPage } from "./page-data.ts";
import { startReviewPage } from "./review-page.ts";
import { change, sendWaiting } from "./send.ts";
import { openStore, type PhoneStore } from "./store.ts";

/*
 * The script of a grower's pages, which work without it: it keeps what is typed, on the phone and at the server, and says so.
 * The pages are drawn by the server and carry no other script.
 */
void start(readPage());
// A page that the browser put away and took out again shows what was true then.
window.addEventListener("pageshow", (event) => event.persisted && location.reload());
document.querySelector<HTMLElement>("[role=alert][tabindex='-1']")?.focus();

async function start(page: PageData | undefined): Promise<void> {
	if (!page) return;
	const store = await openStore();
	await forgetOthers(store, page);
	const form = document.querySelector<HTMLFormElement>("form[data-answering]");
	switch (page.stage) {
		case "ask":
			if (form && page.stepKey !== undefined) await startAskPage(store, { ...page, stepKey: page.stepKey }, form);
			break;
		case "review":
			if (form) await startReviewPage(store, page, form);
			break;
		case "start":
			await change(store, page.responseId, (outbox) => settle(outbox, page.changes));
			await sendWaiting(store, page.responseId, () => {});
			break;
		case "receipt":
			// All is at the server and in the receipt; the phone keeps no copy.
			await store.change(page.responseId, () => undefined);
	}
}

/**
 * Of what was typed in somebody else's session the phone holds only what the server still lacks, until its own link is opened
 * again; no page of this session shows it.
 */
async function forgetOthers(store: PhoneStore, { holder, responseId }: PageData): Promise<void> {
	for (const other of await store.list()) {
		if (other.responseId === responseId && other.holder !== holder) {
			await store.change(responseId, (held) => held && { ...held, holder });
		} else if (other.holder !== holder && listUnsettled(other.outbox).length === 0) {
			await store.change(other.responseId, () => undefined);
		}
	}
}
