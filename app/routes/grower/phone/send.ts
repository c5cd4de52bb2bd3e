import {
	answered,
	type KeptAnswer,
	nextToSend,
	refused,
	sending,
	sentChange,
	type TypedStep,
	typedStep,
} from "#app/collect/outbox.ts";
import type { Held, PhoneStore } from "./store.ts";

/** How far sending came: "sent" when nothing waits any more, "late" when it was taken after the closing. */
export type Sending = "sent" | "late" | "no_signal" | "session_over" | "closed";

/** Why sending ended before all was sent. */
export type Stopped = Exclude<Sending, "sent" | "late">;

/**
 * Sends what waits, step by step in the order of typing, until nothing does or it cannot go on. Only one page of the phone
 * sends at a time, with the service worker; the others wait and find nothing left.
 */
export function sendWaiting(store: PhoneStore, responseId: string, tell: (held: Held) => void): Promise<Sending> {
	const send = () => sendInTurn(store, responseId, tell);
	return navigator.locks ? navigator.locks.request("tallygrove-send", send) : send();
}

async function sendInTurn(store: PhoneStore, responseId: string, tell: (held: Held) => void): Promise<Sending> {
	let done: Sending = "sent";
	for (;;) {
		const held = await store.read(responseId);
		const stepKey = held && nextToSend(held.outbox);
		if (!held || stepKey === undefined) return done;
		const marked = await change(store, responseId, (outbox) => sending(outbox, stepKey));
		const step = marked && typedStep(marked.outbox, stepKey);
		if (!step) return done;
		tell(marked);
		const reply = await post(held, stepKey, step);
		if (typeof reply === "string" && reply !== "refused") return reply;
		if (reply !== "refused" && reply.late) done = "late";
		const next = await change(store, responseId, (outbox) =>
			reply === "refused" ? refused(outbox, stepKey, step.changeId) : answered(outbox, stepKey, step.changeId, reply),
		);
		if (next) tell(next);
	}
}

export function change(store: PhoneStore, responseId: string, next: (outbox: Held["outbox"]) => Held["outbox"]) {
	return store.change(responseId, (held) => held && { ...held, outbox: next(held.outbox) });
}

async function post(held: Held, stepKey: string, step: TypedStep): Promise<KeptAnswer | "refused" | Stopped> {
	const response = await postStep(held, stepKey, step).catch(() => null);
	switch (response?.status) {
		case 200:
		case 409:
			// A hotel's sign-in page, too, answers 200.
			return readAnswer(await response.json().catch(() => null)) ?? "no_signal";
		default:
			return whyNot(response);
	}
}

/** Why the server did not take what was sent. "refused": it never will. */
export async function whyNot(response: Response | null | undefined): Promise<"refused" | Stopped> {
	switch (response?.status) {
		case 401:
			return "session_over";
		case 404:
			return (await codeOf(response)) === "page_not_found" ? "refused" : "session_over";
		case 410:
			return "closed";
		case 400:
		case 413:
			return "refused";
		default:
			return "no_signal";
	}
}

/** Milliseconds after which an answer of the server is not waited for any more. */
const patience = 20_000;
const leaving = new AbortController();

/**
 * The form's own post is about to carry all that the page was sending: what is under way is waited for no longer, since the
 * server would refuse it as older than what it has by then.
 */
export function stopSending(): void {
	leaving.abort();
}

function untilLeaving(): AbortSignal {
	const ends = new AbortController();
	const end = () => ends.abort();
	if (leaving.signal.aborted) end();
	leaving.signal.addEventListener("abort", end, { once: true });
	setTimeout(end, patience);
	return ends.signal;
}

/** @param keepalive when the page is being left, as long as what is sent is small. */
export function postStep(
	{ surveyId, operationId }: Pick<Held, "surveyId" | "operationId">,
	stepKey: string,
	step: TypedStep,
	keepalive = false,
): Promise<Response> {
	const body = new URLSearchParams(fieldsOf(step));
	for (const [name, value] of Object.entries(step.values)) {
		for (const text of [value].flat()) body.append(name, text);
	}
	return fetch(`/answer/${surveyId}/${operationId}/keep/${encodeURIComponent(stepKey)}`, {
		method: "POST",
		body,
		keepalive: keepalive && String(body).length < 60_000,
		redirect: "error",
		signal: keepalive ? AbortSignal.timeout(patience) : untilLeaving(),
	});
}

/** What a change says of itself, as the fields of a form. */
export function fieldsOf(step: TypedStep): [string, string][] {
	const { seen, changeId, unsure } = sentChange(step);
	return [
		["_seen", String(seen)],
		...(changeId === null ? [] : [["_change", changeId] as [string, string]]),
		["_language", step.language],
		...unsure.map((id): [string, string] => ["_unsure", id]),
	];
}

function readAnswer(body: unknown): KeptAnswer | undefined {
	const answer = body as Partial<KeptAnswer> | null;
	if (typeof answer?.kept !== "boolean" || typeof answer.version !== "number") return undefined;
	return Array.isArray(answer.unread) ? (answer as KeptAnswer) : undefined;
}

async function codeOf(response: Response): Promise<unknown> {
	const body = (await response.json().catch(() => null)) as { code?: unknown } | null;
	return body?.code;
}
