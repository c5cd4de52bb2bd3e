import { sentByHeader } from "./sent-by.ts";

/** Why what a page sent was not taken: the session is over, or somebody else is signed in by now. */
type Why = "over" | "other";
/** `again` sends the form once more by the button that sent it; null where no button did. */
export type HeldPost = { why: Why; again: (() => void) | null };

const whys: Record<number, Why> = { 401: "over", 412: "other" };
const watching = new Set<() => void>();
let held: HeldPost | null = null;

export const heldPost = (): HeldPost | null => held;

export function watchHeldPost(changed: () => void): () => void {
	watching.add(changed);
	return () => watching.delete(changed);
}

export function forgetHeldPost(): void {
	tell(null);
}

function tell(next: HeldPost | null): void {
	if (held === next) return;
	held = next;
	for (const changed of watching) changed();
}

/**
 * Keeps a page and all that is typed on it where the server does not know who sends any more: the router would show a refusal in
 * the page's place. It is left waiting for the answer instead, which it gives up as soon as something else is sent or opened.
 * Whatever is sent says whose page it is.
 */
export function holdRefusedPosts(): void {
	const send = window.fetch.bind(window);
	let pressed: (() => void) | null = null;
	document.addEventListener(
		"submit",
		({ target, submitter }) => {
			const form = target as HTMLFormElement;
			// Not by its property, which a field of that name would stand for.
			if (form.getAttribute("method") === "post") pressed = () => form.isConnected && form.requestSubmit(submitter);
		},
		true,
	);
	window.fetch = async (address, init) => {
		const { holder } = document.documentElement.dataset;
		if (holder === undefined || !init || !isOfForm(address, init)) return send(address, init);
		const again = pressed;
		pressed = null;
		const headers = new Headers(init.headers);
		headers.set(sentByHeader, holder);
		const answer = await send(address, { ...init, headers });
		const why = whys[answer.status];
		tell(why ? { why, again: again ?? held?.again ?? null } : null);
		return why ? untilGivenUp(init.signal) : answer;
	};
}

/** The router sends a page's forms to the page's address with this end. */
function isOfForm(address: RequestInfo | URL, init: RequestInit): boolean {
	return init.method === "POST" && address instanceof URL && address.pathname.endsWith(".data");
}

function untilGivenUp(signal: AbortSignal | null | undefined): Promise<never> {
	return new Promise((_, reject) => {
		signal?.addEventListener("abort", () => reject(signal.reason as Error), { once: true });
	});
}
