import {
	emptyOutbox,
	letGo,
	sending,
	settle,
	type,
	type Typed,
	typedStep,
	type TypedStep,
} from "#app/collect/outbox.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { fill, setHidden, valuesIn } from "./form-values.ts";
import { sayKept } from "./kept-word.ts";
import type { PageData } from "./page-data.ts";
import { change, fieldsOf, postStep, type Sending, sendWaiting } from "./send.ts";
import type { Held, PhoneStore } from "./store.ts";

/** Milliseconds after the last letter until the phone holds a screen, until it is sent, and until what failed is tried again. */
const pauses = { record: 150, send: 600, retry: 15_000 };

type AskPage = {
	store: PhoneStore;
	page: PageData & { stepKey: string };
	form: HTMLFormElement;
	/** The change that the boxes show; null where they show the server's answers. */
	from: string | null;
	/** What the phone held when it was last looked at. */
	held: Held | undefined;
	/** What of the boxes has been recorded. */
	recorded: string;
	/** Recordings take turns. */
	turn: Promise<unknown>;
	sending: Sending | undefined;
	twice: boolean;
	leaving: boolean;
};

/**
 * Keeps a screen as it is typed: on the phone at once, at the server when it can be reached, with a word on which. What the
 * phone still holds of it is put back into its boxes.
 */
export async function startAskPage(store: PhoneStore, page: PageData & { stepKey: string }, form: HTMLFormElement) {
	const ask: AskPage = {
		store,
		page,
		form,
		from: null,
		held: undefined,
		recorded: JSON.stringify(valuesIn(form)),
		turn: Promise.resolve(),
		sending: "sent",
		twice: false,
		leaving: false,
	};
	await showHeld(ask);
	listen(ask);
	void send(ask);
}

/** Lets go of what the server has, and puts back into the boxes what it has not. */
async function showHeld(ask: AskPage): Promise<void> {
	const { store, page, form } = ask;
	const held = await change(store, page.responseId, (outbox) => settle(outbox, page.changes));
	ask.held = held;
	const step = held && typedStep(held.outbox, page.stepKey);
	if (!step || step.state === "kept") return;
	ask.from = step.changeId;
	// Somebody who began to type before the store was read goes on; with both sides before one's eyes, both were seen.
	const isUntouched = JSON.stringify(valuesIn(form)) === ask.recorded;
	if (isUntouched && step.language === page.language) {
		fill(form, step.values);
		ask.recorded = JSON.stringify(valuesIn(form));
	}
	if (!showsBoth(form)) setHidden(form, "_seen", [String(step.seen)]);
}

function listen(ask: AskPage): void {
	const { form } = ask;
	const timers: number[] = [];
	const after = (pause: number, work: () => unknown) => timers.push(window.setTimeout(work, pause));
	const soon = (toRecord: number, toSend: number) => {
		for (const timer of timers.splice(0)) window.clearTimeout(timer);
		// Where both sides of a conflict are shown, only going on is a choice.
		if (showsBoth(form)) return;
		after(toRecord, () => record(ask));
		after(toSend, async () => (await record(ask)) && (await send(ask)));
	};
	form.addEventListener("input", () => soon(pauses.record, pauses.send));
	form.addEventListener("change", () => soon(0, 0));
	form.addEventListener("submit", (event) => void goOn(ask, event));
	document.addEventListener("click", (event) => void leaveByLink(ask, event));
	window.addEventListener("online", () => void send(ask));
	window.addEventListener("offline", () => void send(ask));
	window.addEventListener("pagehide", () => leave(ask));
	document.addEventListener("visibilitychange", () => document.visibilityState === "hidden" && leave(ask));
	window.setInterval(() => isStuck(ask) && void send(ask), pauses.retry);
}

/** Whether sending ended before all was sent, for a reason that can pass. */
function isStuck(ask: AskPage): boolean {
	return ask.sending === "no_signal" || ask.sending === "session_over";
}

/** `by` is the button that was pressed, which can say something of its own. */
type GoingOn = { by?: HTMLElement | null; goneOn?: boolean };

/** Records what the boxes hold, once. @returns whether it was recorded, or had been. */
function record(ask: AskPage, { by = null, goneOn = false }: GoingOn = {}): Promise<boolean> {
	const values = valuesIn(ask.form, by);
	const text = JSON.stringify(values);
	const work = async () => {
		if (text === ask.recorded && !goneOn) return !ask.twice;
		const typed = typedNow(ask, values);
		let outcome = "typed";
		const held = await ask.store.change(ask.page.responseId, (before) => {
			const next = typeInto(before ?? newHeld(ask.page), ask.page.stepKey, typed, { sent: goneOn, goneOn });
			outcome = next.outcome;
			return next.held;
		});
		ask.twice = outcome !== "typed";
		if (!ask.twice) Object.assign(ask, { from: typed.changeId, recorded: text });
		say(ask, held);
		return !ask.twice;
	};
	const turn = ask.turn.then(work, work);
	ask.turn = turn;
	return turn;
}

function typedNow({ page, from, form }: AskPage, values: StepValues): Typed {
	return { values, language: page.language, seen: seenIn(form), changeId: crypto.randomUUID(), from };
}

function typeInto(held: Held, stepKey: string, typed: Typed, mark: { sent: boolean; goneOn: boolean }) {
	const { outbox, outcome } = type(held.outbox, stepKey, typed);
	if (outcome !== "typed") return { held, outcome };
	return { held: { ...held, outbox: mark.sent ? sending(outbox, stepKey, mark) : outbox }, outcome };
}

function newHeld({ responseId, surveyId, operationId, holder }: PageData): Held {
	return { responseId, surveyId, operationId, holder, outbox: emptyOutbox };
}

async function send(ask: AskPage): Promise<void> {
	const { store, page } = ask;
	if (!navigator.onLine) {
		ask.sending = "no_signal";
		say(ask, await store.read(page.responseId));
		return;
	}
	ask.sending = undefined;
	const outcome = await sendWaiting(store, page.responseId, (held) => say(ask, held));
	ask.sending = outcome;
	say(ask, await store.read(page.responseId));
}

/** Follows what the server made of this page's own change, and says what has become of it. */
function say(ask: AskPage, held: Held | undefined): void {
	ask.held = held;
	const step = held && typedStep(held.outbox, ask.page.stepKey);
	if (step && step.changeId === ask.from && step.state !== "changed_elsewhere" && !showsBoth(ask.form))
		setHidden(ask.form, "_seen", [String(step.seen)]);
	const isOffline = ask.sending !== "closed" && !navigator.onLine;
	const { store, page, twice } = ask;
	const isSaid = step !== undefined || twice || ask.sending === "closed";
	if (isSaid) sayKept(page, { step, sending: isOffline ? "no_signal" : ask.sending, lasting: store.lasting(), twice });
}

/**
 * Goes on to the next screen by the form's own post, which needs no script. Before that the phone holds what is posted; it
 * learns from the next page that it arrived. Without signal, and without a service worker to answer, the page stays.
 */
async function goOn(ask: AskPage, event: SubmitEvent): Promise<void> {
	event.preventDefault();
	if (ask.leaving) return;
	ask.leaving = true;
	const { submitter: by } = event;
	by?.setAttribute("aria-disabled", "true");
	const isRecorded = await within(1500, record(ask, { by, goneOn: true }));
	const held = await within(500, ask.store.read(ask.page.responseId));
	const step = held && typedStep(held.outbox, ask.page.stepKey);
	if (!navigator.onLine && !navigator.serviceWorker?.controller) {
		ask.leaving = false;
		by?.removeAttribute("aria-disabled");
		return;
	}
	// What another page of this phone holds must reach the server first, so that it can show both.
	if (!isRecorded)
		await within(
			5000,
			sendWaiting(ask.store, ask.page.responseId, () => {}),
		);
	else if (step) tellOf(ask.form, step);
	// A form that is submitted by a script leaves out the button.
	if (by instanceof HTMLButtonElement && by.name !== "") setHidden(ask.form, by.name, [by.value]);
	ask.form.submit();
}

function tellOf(form: HTMLFormElement, step: TypedStep): void {
	const fields = fieldsOf(step);
	for (const name of new Set(fields.map(([field]) => field)))
		setHidden(
			form,
			name,
			fields.filter(([field]) => field === name).map(([, value]) => value),
		);
}

/** A link is followed when what was typed is on the phone. */
async function leaveByLink(ask: AskPage, event: MouseEvent): Promise<void> {
	const link = event.target instanceof Element ? event.target.closest("a") : null;
	if (!link || link.origin !== location.origin || link.hash || event.defaultPrevented) return;
	if (event.ctrlKey || event.metaKey || event.shiftKey || event.button !== 0) return;
	event.preventDefault();
	if (link.dataset.takeTheirs !== undefined) await takeTheirs(ask);
	else await within(1500, record(ask));
	location.href = link.href;
}

async function takeTheirs(ask: AskPage): Promise<void> {
	ask.recorded = JSON.stringify(valuesIn(ask.form));
	ask.leaving = true;
	await change(ask.store, ask.page.responseId, (outbox) => letGo(outbox, ask.page.stepKey));
}

/**
 * The page is being left by other ways, and nothing can be waited for: what was typed last goes to the server and to the phone
 * side by side, under one name.
 */
function leave(ask: AskPage): void {
	const { page, form } = ask;
	const values = valuesIn(form);
	const text = JSON.stringify(values);
	if (ask.leaving || ask.twice || text === ask.recorded || showsBoth(form)) return;
	const typed = typedNow(ask, values);
	const mark = { sent: true, goneOn: false };
	const now = typeInto(ask.held ?? newHeld(page), page.stepKey, typed, mark);
	const step = typedStep(now.held.outbox, page.stepKey);
	if (now.outcome !== "typed" || !step) return;
	Object.assign(ask, { from: typed.changeId, recorded: text, held: now.held });
	void postStep(page, page.stepKey, step, true).catch(() => null);
	void ask.store.change(page.responseId, (held) => typeInto(held ?? newHeld(page), page.stepKey, typed, mark).held);
}

function showsBoth(form: HTMLFormElement): boolean {
	return form.dataset.both !== undefined;
}

function seenIn(form: HTMLFormElement): number {
	return Number(form.querySelector<HTMLInputElement>("input[name=_seen]")?.value ?? 0);
}

/** What a store or a server takes too long for, nobody waits for. */
function within<T>(most: number, work: Promise<T>): Promise<T | undefined> {
	const late = new Promise<undefined>((resolve) => window.setTimeout(() => resolve(undefined), most));
	return Promise.race([work.catch(() => undefined), late]);
}
