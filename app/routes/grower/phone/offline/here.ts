import type { AskPage } from "../ask-page.ts";
import { type PhoneStore } from "../store.ts";

/** What the page for no signal works with. */
export const here: {
	store: PhoneStore;
	/** The screen that is shown and keeps what is typed. */
	ask: AskPage | undefined;
	/** Whether the server has answered since: the next page is its own again. */
	reachable: boolean;
} = { store: undefined as never, ask: undefined, reachable: false };

const changes = new EventTarget();

export function setReachable(reachable: boolean): void {
	here.reachable = reachable;
	changes.dispatchEvent(new Event("reachable"));
}

/** @returns what ends it. */
export function onReachable(listener: () => void): () => void {
	changes.addEventListener("reachable", listener);
	return () => changes.removeEventListener("reachable", listener);
}
