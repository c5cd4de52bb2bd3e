import type { Typed } from "#app/collect/outbox.ts";
import { typeInto } from "./ask-page.ts";
import { type Held, openStore, type PhoneStore } from "./store.ts";

/*
 * What was typed just before a page was left. A browser may end a page before the phone's store has written it, and then
 * the next page would show what was typed before that: a note, which is written at once, tells the next page.
 */

/** What a page typed last; `held` stands for what the phone holds of the response where it holds nothing. */
type LeavingNote = { held: Held; stepKey: string; typed: Typed };

const prefix = "tallygrove-leaving-";

export function writeNote(note: LeavingNote): void {
	// Without room for a note the store alone must do.
	withNotes((notes) => notes.setItem(prefix + note.typed.changeId, JSON.stringify(note)));
}

/** The store has it. */
export function dropNote(changeId: string): void {
	withNotes((notes) => notes.removeItem(prefix + changeId));
}

/** The store as a page opens it, with what earlier pages could only leave a note of. */
export async function openPageStore(): Promise<PhoneStore> {
	const store = await openStore();
	for (const [key, note] of readNotes()) {
		if (note) {
			const { held, stepKey, typed } = note;
			await store.change(
				held.responseId,
				(before) => typeInto(before ?? held, stepKey, typed, { sent: true, goneOn: false }).held,
			);
		}
		withNotes((notes) => notes.removeItem(key));
	}
	return store;
}

function readNotes(): [string, LeavingNote | undefined][] {
	const read: [string, LeavingNote | undefined][] = [];
	withNotes((notes) => {
		const keys = Array.from({ length: notes.length }, (_, at) => notes.key(at));
		for (const key of keys) if (key?.startsWith(prefix)) read.push([key, readable(notes.getItem(key))]);
	});
	return read;
}

/** What a broken note says is nothing: never a page that cannot be opened. */
function readable(text: string | null): LeavingNote | undefined {
	try {
		const note = JSON.parse(text ?? "") as LeavingNote;
		return typeof note.held.responseId === "string" && typeof note.typed.changeId === "string" ? note : undefined;
	} catch {
		return undefined;
	}
}

function withNotes(work: (notes: Storage) => void): void {
	try {
		work(localStorage);
	} catch {
		// The browser keeps none, as some do in a private window.
	}
}
