import type { PhotoHere } from "./photos-here.ts";
import type { StepValues } from "./posted.ts";
import { changeOf, mostUnsure, type SentChange, type StepChanges } from "./step-change.ts";

/*
 * What one phone holds of one response: of each step what was typed last, and whether the server has it. Every function
 * here takes an outbox and gives the next one; nothing is written in place, and no clock decides anything.
 */

export type TypedStep = {
	/** The name of this change, by which the server knows it again. */
	changeId: string;
	/** Its place in the order in which steps were typed. */
	order: number;
	values: StepValues;
	/** In which language its numbers are written. */
	language: "en" | "es";
	/** The version of the step upon which it was typed, or that it made. */
	seen: number;
	/** Whether it was sent and no answer has come yet. */
	sent: boolean;
	/** Whether it was sent by going on to the next screen, which keeps the whole step or nothing of it. */
	goneOn: boolean;
	/** Earlier changes of the step that were sent and never answered. */
	unsure: string[];
	/**
	 * `unread`: the server has what could be read of it. `changed_elsewhere`: another device has changed the step since.
	 * `refused`: the server will never take it as it is. Only what is `waiting` is sent.
	 */
	state: "waiting" | "kept" | "unread" | "changed_elsewhere" | "refused";
	/** Questions that could not be read. */
	unread: string[];
};
export type Outbox = {
	steps: Record<string, TypedStep>;
	/** Photos that the server does not have yet, in the order in which they were taken. */
	photos: PhotoHere[];
	/** How many changes were typed so far. */
	count: number;
	/** Whether the grower has sent the answers in and the server does not know it yet. */
	sendIn: boolean;
	/** Whether they were sent in while no page could show the receipt. */
	sentIn?: boolean;
};
export type KeptAnswer = { kept: boolean; version: number; unread: string[]; late?: boolean };

export const emptyOutbox: Outbox = { steps: {}, photos: [], count: 0, sendIn: false };

export function typedStep(outbox: Outbox, stepKey: string): TypedStep | undefined {
	return Object.hasOwn(outbox.steps, stepKey) ? outbox.steps[stepKey] : undefined;
}

/** What a page says it typed: `from` is the change that it showed or made before, null where it showed the server's answers. */
export type Typed = Pick<TypedStep, "values" | "language" | "seen" | "changeId"> & { from: string | null };

/**
 * Puts what was typed in place of what the same page typed before. What another page of this phone has typed, and the
 * server does not have yet, is not overwritten.
 */
export function type(
	outbox: Outbox,
	stepKey: string,
	typed: Typed,
): { outbox: Outbox; outcome: "typed" | "typed_here" } {
	const before = typedStep(outbox, stepKey);
	// A page's last words come by its note and by itself.
	if (before?.changeId === typed.changeId) return { outbox, outcome: "typed" };
	const isOwn = before !== undefined && before.changeId === typed.from;
	if (before && !isOwn && before.state !== "kept") return { outbox, outcome: "typed_here" };
	const { from: _, ...said } = typed;
	const step: TypedStep = {
		...said,
		seen: isOwn ? Math.max(before.seen, typed.seen) : typed.seen,
		order: outbox.count + 1,
		sent: false,
		goneOn: false,
		unsure: isOwn ? [...before.unsure, ...(before.sent ? [before.changeId] : [])].slice(-mostUnsure) : [],
		state: "waiting",
		unread: [],
	};
	const steps = { ...outbox.steps, [stepKey]: step };
	return { outbox: { ...outbox, steps, count: step.order, sentIn: false }, outcome: "typed" };
}

/** The step to send next, in the order of typing. */
export function nextToSend(outbox: Outbox): string | undefined {
	const waiting = Object.entries(outbox.steps).filter(([, step]) => step.state === "waiting");
	return waiting.toSorted(([, one], [, other]) => one.order - other.order)[0]?.[0];
}

/** Notes that a step is being sent, before it is: whoever stops in between must not think that it was not. */
export function sending(outbox: Outbox, stepKey: string, { goneOn = false } = {}): Outbox {
	return change(outbox, stepKey, (step) => ({ ...step, sent: true, goneOn }));
}

export function sentChange({ seen, changeId, unsure }: TypedStep): SentChange {
	return { seen, changeId, unsure };
}

/** Takes in what the server said of a change, which by then may no longer be the newest. */
export function answered(outbox: Outbox, stepKey: string, changeId: string, answer: KeptAnswer): Outbox {
	return change(outbox, stepKey, (step) => {
		if (step.changeId === changeId) return withAnswer(step, answer);
		const at = step.unsure.indexOf(changeId);
		// Of an older change only a yes says something: the newer one then rests on it. A no will be said again of the newer.
		if (at < 0 || !answer.kept) return step;
		// It may have been sent twice, and the second may still make a newer version of it.
		return { ...step, seen: Math.max(step.seen, answer.version), unsure: step.unsure.slice(at) };
	});
}

function withAnswer(step: TypedStep, { kept, version, unread }: KeptAnswer): TypedStep {
	if (!kept) return { ...step, sent: false, state: "changed_elsewhere" };
	const state = unread.length > 0 ? "unread" : "kept";
	return { ...step, seen: version, sent: false, unsure: [], state, unread };
}

/** The server will never take this change; it stays on the phone for the grower to mend. */
export function refused(outbox: Outbox, stepKey: string, changeId: string): Outbox {
	return change(outbox, stepKey, (step) =>
		step.changeId === changeId ? { ...step, sent: false, state: "refused" } : step,
	);
}

/**
 * Takes in which change of each step the server holds as the newest: what went on to the next screen has arrived then, and
 * what the server has is not to be held here too.
 */
export function settle(outbox: Outbox, changes: StepChanges): Outbox {
	const steps = Object.entries(outbox.steps).flatMap(([key, step]) => {
		const newest = changeOf(changes, key);
		const isOurs = newest?.changeId === step.changeId;
		const isThere = (isOurs && step.goneOn) || (step.state === "kept" && step.seen <= (newest?.version ?? 0));
		return isThere ? [] : [[key, step] as const];
	});
	return { ...outbox, steps: Object.fromEntries(steps) };
}

/** Notes that the grower has sent the answers in while there was no signal, or that a page sends them now. */
export function askToSendIn(outbox: Outbox, sendIn: boolean): Outbox {
	return { ...outbox, sendIn };
}

/** Notes that they have been sent in, for the page that is to show the receipt. */
export function markSentIn(outbox: Outbox): Outbox {
	return { ...outbox, sendIn: false, sentIn: true };
}

/** Whether the answers were sent in, nothing was typed since, and the receipt has not been shown. */
export function awaitsReceipt(outbox: Outbox): boolean {
	return outbox.sentIn === true && listUnsettled(outbox).length === 0;
}

/** Lets a step go, for the answers that the server has. */
export function letGo(outbox: Outbox, stepKey: string): Outbox {
	const { [stepKey]: _, ...steps } = outbox.steps;
	return { ...outbox, steps };
}

/** Steps whose newest answers the server does not have, in the order of typing, and those with photos that it has not. */
export function listUnsettled(outbox: Outbox): string[] {
	const steps = Object.entries(outbox.steps).filter(([, { state }]) => state !== "kept");
	const typed = steps.toSorted(([, one], [, other]) => one.order - other.order).map(([key]) => key);
	return [...new Set([...typed, ...outbox.photos.map(({ stepKey }) => stepKey)])];
}

function change(outbox: Outbox, stepKey: string, next: (step: TypedStep) => TypedStep): Outbox {
	const step = typedStep(outbox, stepKey);
	return step ? { ...outbox, steps: { ...outbox.steps, [stepKey]: next(step) } } : outbox;
}
