import { letGo, typedStep, type TypedStep } from "#app/collect/outbox.ts";
import { type AskPage, newHeld, record, showsBoth, typedNow, typeInto } from "./ask-page.ts";
import { setHidden, valuesIn } from "./form-values.ts";
import { dropNote, writeNote } from "./leaving-note.ts";
import { change, fieldsOf, postStep, sendWaiting, stopSending } from "./send.ts";

/** Ways off a screen that the server drew: each first makes sure of what was typed. */
export function listenForLeaving(ask: AskPage): void {
	const state = { leaving: false };
	ask.form.addEventListener("submit", (event) => {
		event.preventDefault();
		if (state.leaving) return;
		state.leaving = true;
		void goOn(ask, event.submitter).then((gone) => (state.leaving = gone));
	});
	document.addEventListener("click", (event) => {
		const link = linkClicked(event);
		if (!link) return;
		event.preventDefault();
		void followLink(ask, link, state);
	});
	listenForHiding(ask, () => state.leaving);
}

/** The page is being closed, covered or left by the browser's own ways. */
export function listenForHiding(ask: AskPage, isLeaving: () => boolean): void {
	const { signal } = ask;
	const leave = () => isLeaving() || sendAtOnce(ask);
	window.addEventListener("pagehide", leave, { signal });
	document.addEventListener("visibilitychange", () => document.visibilityState === "hidden" && leave(), { signal });
}

/**
 * Goes on by the form's own post, which needs no script. Before that the phone holds what is posted; it learns from the next
 * page that it arrived. Without signal, and without a service worker to answer, the page stays.
 * @returns whether the page is being left.
 */
async function goOn(ask: AskPage, by: HTMLElement | null): Promise<boolean> {
	const { form, page, store } = ask;
	by?.setAttribute("aria-disabled", "true");
	const isRecorded = await within(1500, record(ask, { by, goneOn: true }));
	if (!navigator.onLine && !navigator.serviceWorker?.controller) {
		by?.removeAttribute("aria-disabled");
		return false;
	}
	const held = await within(500, store.read(page.responseId));
	const step = held && typedStep(held.outbox, page.stepKey);
	// What another page of this phone holds must reach the server first, so that it can show both.
	if (!isRecorded)
		await within(
			5000,
			sendWaiting(store, page.responseId, () => {}),
		);
	else if (step) tellOf(form, step);
	// A form that a script submits leaves out the button.
	if (by instanceof HTMLButtonElement && by.name !== "") setHidden(form, by.name, [by.value]);
	stopSending();
	form.submit();
	return true;
}

function tellOf(form: HTMLFormElement, step: TypedStep): void {
	const fields = fieldsOf(step);
	for (const name of new Set(fields.map(([field]) => field))) {
		const values = fields.filter(([field]) => field === name).map(([, value]) => value);
		setHidden(form, name, values);
	}
}

/** A link of this site that the browser would follow in this window. */
function linkClicked(event: MouseEvent): HTMLAnchorElement | null {
	const link = event.target instanceof Element ? event.target.closest("a") : null;
	if (!link || link.origin !== location.origin || link.hash !== "" || event.defaultPrevented) return null;
	return event.ctrlKey || event.metaKey || event.shiftKey || event.button !== 0 ? null : link;
}

/** A link is followed when what was typed is on the phone, or when it was given up for another device's answers. */
async function followLink(ask: AskPage, link: HTMLAnchorElement, state: { leaving: boolean }): Promise<void> {
	const { store, page, form } = ask;
	if (link.dataset.takeTheirs !== undefined) {
		state.leaving = true;
		await within(
			1500,
			change(store, page.responseId, (outbox) => letGo(outbox, page.stepKey)),
		);
	} else if (!showsBoth(form)) {
		await within(1500, record(ask));
	}
	location.href = link.href;
}

/**
 * The page is being left by other ways, and nothing can be waited for: what was typed last goes to the server, to the phone
 * and into a note for the next page side by side, under one name.
 */
function sendAtOnce(ask: AskPage): void {
	const { page, form, store } = ask;
	const values = valuesIn(form);
	const text = JSON.stringify(values);
	if (ask.twice || text === ask.recorded || showsBoth(form)) return;
	const typed = typedNow(ask, values);
	const mark = { sent: true, goneOn: false };
	const now = typeInto(ask.held ?? newHeld(page), page.stepKey, typed, mark);
	const step = typedStep(now.held.outbox, page.stepKey);
	if (now.outcome !== "typed" || !step) return;
	// A page that came back as it was left does not know whether another page has sent its earlier change since.
	const unsure = [...step.unsure, ...(ask.from === null ? [] : [ask.from])];
	Object.assign(ask, { from: typed.changeId, recorded: text, held: now.held });
	writeNote({ held: newHeld(page), stepKey: page.stepKey, typed });
	void postStep(page, page.stepKey, { ...step, unsure }, true).catch(() => null);
	void store
		.change(page.responseId, (held) => typeInto(held ?? newHeld(page), page.stepKey, typed, mark).held)
		.then(() => dropNote(typed.changeId));
}

/** What a store or a server takes too long for, nobody waits for. */
function within<T>(most: number, work: Promise<T>): Promise<T | undefined> {
	const late = new Promise<undefined>((resolve) => window.setTimeout(() => resolve(undefined), most));
	return Promise.race([work.catch(() => undefined), late]);
}
