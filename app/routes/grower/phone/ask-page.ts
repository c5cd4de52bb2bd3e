import { emptyOutbox, sending, settle, type, type Typed, typedStep } from "#app/collect/outbox.ts";
import type { StepValues } from "#app/collect/posted.ts";
import { fill, setHidden, valuesDrawn, valuesIn } from "./form-values.ts";
import { sayKept } from "./kept-word.ts";
import type { BegunPage } from "./page-data.ts";
import { change, type Sending, sendWaiting } from "./send.ts";
import type { Held, PhoneStore } from "./store.ts";

/** Milliseconds after the last letter until the phone holds a screen, until it is sent, and until what failed is tried again. */
const pauses = { record: 150, send: 600, retry: 15_000 };

/** A page that asks a step. */
export type AskedPage = BegunPage & { stepKey: string };
export type AskPage = {
	store: PhoneStore;
	page: AskedPage;
	form: HTMLFormElement;
	/** Ends with the page, where another is drawn in the same document. */
	signal: AbortSignal | undefined;
	/** The change that the boxes show; null where they show the server's answers. */
	from: string | null;
	/** What the phone held when it was last looked at. */
	held: Held | undefined;
	/** What of the boxes has been recorded. */
	recorded: string;
	/** Recordings take turns. */
	turn: Promise<unknown>;
	sending: Sending | undefined;
	/** Whether another page of this phone holds the screen. */
	twice: boolean;
};

/**
 * Keeps a screen as it is typed: on the phone at once, at the server when it can be reached, with a word on which. What the
 * phone still holds of it is put back into its boxes.
 */
export async function startAskPage(
	store: PhoneStore,
	page: AskedPage,
	form: HTMLFormElement,
	signal?: AbortSignal,
): Promise<AskPage> {
	const ask: AskPage = {
		store,
		page,
		form,
		signal,
		from: null,
		held: undefined,
		// Whoever types before this script is there has typed already.
		recorded: JSON.stringify(valuesDrawn(form)),
		turn: Promise.resolve(),
		sending: "sent",
		twice: false,
	};
	await showHeld(ask);
	listen(ask);
	void record(ask).then(() => send(ask));
	return ask;
}

/** Lets go of what the server has, and puts back into the boxes what it has not. */
async function showHeld(ask: AskPage): Promise<void> {
	const { store, page, form } = ask;
	ask.held = await change(store, page.responseId, (outbox) => settle(outbox, page.told.changes));
	const step = ask.held && typedStep(ask.held.outbox, page.stepKey);
	// What the server has by now and this page still lacks was sent while the page was on its way: it is shown, too.
	if (!step) return;
	ask.from = step.changeId;
	const isUntouched = JSON.stringify(valuesIn(form)) === ask.recorded;
	if (isUntouched && step.language === page.language) {
		fill(form, step.values);
		ask.recorded = JSON.stringify(valuesIn(form));
	}
	// Where both sides of a conflict are shown, it is the server's version that is typed upon now.
	if (!showsBoth(form)) setHidden(form, "_seen", [String(step.seen)]);
}

function listen(ask: AskPage): void {
	const { form, signal } = ask;
	const timers: number[] = [];
	const after = (pause: number, work: () => unknown) => timers.push(window.setTimeout(work, pause));
	const soon = (toRecord: number, toSend: number) => {
		for (const timer of timers.splice(0)) window.clearTimeout(timer);
		// Where both sides of a conflict are shown, only going on is a choice.
		if (showsBoth(form)) return;
		after(toRecord, () => record(ask));
		after(toSend, async () => (await record(ask)) && (await send(ask)));
	};
	form.addEventListener("input", () => soon(pauses.record, pauses.send), { signal });
	form.addEventListener("change", () => soon(0, 0), { signal });
	window.addEventListener("online", () => void send(ask), { signal });
	window.addEventListener("offline", () => void send(ask), { signal });
	const retry = window.setInterval(() => isStuck(ask) && void send(ask), pauses.retry);
	signal?.addEventListener("abort", () => window.clearInterval(retry));
}

/** Whether sending ended before all was sent, for a reason that can pass. */
function isStuck(ask: AskPage): boolean {
	return ask.sending === "no_signal" || ask.sending === "session_over";
}

/** `by` is the button that was pressed, which can say something of its own; `values` are what was posted by it. */
export type GoingOn = { by?: HTMLElement | null; values?: StepValues; goneOn?: boolean };

/** Records what the boxes hold, once. @returns whether it was recorded, or had been. */
export function record(ask: AskPage, { by = null, goneOn = false, values: posted }: GoingOn = {}): Promise<boolean> {
	const values = posted ?? valuesIn(ask.form, by);
	// What a button confirmed stays recorded as long as the boxes do not change.
	const { confirm, ...boxes } = values;
	const text = JSON.stringify(boxes);
	const work = async () => {
		if (text === ask.recorded && confirm === undefined && !goneOn) return !ask.twice;
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

export function typedNow({ page, from, form }: AskPage, values: StepValues): Typed {
	const seen = Number(form.querySelector<HTMLInputElement>("input[name=_seen]")?.value ?? 0);
	return { values, language: page.language, seen, changeId: crypto.randomUUID(), from };
}

export function typeInto(held: Held, stepKey: string, typed: Typed, mark: { sent: boolean; goneOn: boolean }) {
	const { outbox, outcome } = type(held.outbox, stepKey, typed);
	if (outcome !== "typed") return { held, outcome };
	return { held: { ...held, outbox: mark.sent ? sending(outbox, stepKey, mark) : outbox }, outcome };
}

export function newHeld({ responseId, surveyId, operationId, holder }: BegunPage): Held {
	return { responseId, surveyId, operationId, holder, outbox: emptyOutbox };
}

export async function send(ask: AskPage): Promise<void> {
	const { store, page } = ask;
	if (navigator.onLine) {
		ask.sending = undefined;
		ask.sending = await sendWaiting(store, page.responseId, (held) => say(ask, held));
	} else ask.sending = "no_signal";
	say(ask, await store.read(page.responseId));
}

/** Follows what the server made of this page's own change, and says what has become of it. */
function say(ask: AskPage, held: Held | undefined): void {
	if (ask.signal?.aborted) return;
	ask.held = held;
	const { store, page, form, twice, from } = ask;
	const step = held && typedStep(held.outbox, page.stepKey);
	if (step?.changeId === from && step?.state !== "changed_elsewhere" && step && !showsBoth(form))
		setHidden(form, "_seen", [String(step.seen)]);
	const came = ask.sending !== "closed" && !navigator.onLine ? "no_signal" : ask.sending;
	if (step || twice || came === "closed") sayKept(page, { step, sending: came, lasting: store.lasting(), twice });
}

export function showsBoth(form: HTMLFormElement): boolean {
	return form.dataset.both !== undefined;
}
