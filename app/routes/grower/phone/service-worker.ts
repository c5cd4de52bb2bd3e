import { nextToSend } from "#app/collect/outbox.ts";
import { nextPhoto } from "#app/collect/photos-here.ts";
import { placeIn } from "./place.ts";
import { sendWaiting } from "./send.ts";
import { sendIn } from "./send-in.ts";
import { sendPhotos } from "./send-photos.ts";
import { openStore } from "./store.ts";

/*
 * Answers for a grower's pages while the server cannot be reached: with one page that holds nobody's answers and draws them
 * from what the phone holds. Of what the server sends it keeps only that page with its script and style; no page of a
 * person, and nothing outside /answer/, is ever put away.
 */
type Extendable = Event & { waitUntil(work: Promise<unknown>): void };
type Fetching = Extendable & { request: Request; respondWith(answer: Promise<Response>): void };
const worker = globalThis as unknown as {
	skipWaiting(): Promise<void>;
	clients: { claim(): Promise<void> };
	addEventListener(name: "install" | "activate" | "sync", listener: (event: Extendable) => void): void;
	addEventListener(name: "fetch", listener: (event: Fetching) => void): void;
};

const cacheName = "tallygrove-offline";
const offlinePage = "/answer/offline";
/** Milliseconds after which a page, or what a form has sent, is given up for the phone's own. */
const patience = { GET: 8_000, POST: 15_000 };

worker.addEventListener("install", (event) => event.waitUntil(takeAlong().then(() => worker.skipWaiting())));
worker.addEventListener("activate", (event) => event.waitUntil(worker.clients.claim()));
worker.addEventListener("sync", (event) => event.waitUntil(sendAll()));
worker.addEventListener("fetch", (event) => {
	const { request } = event;
	const { pathname, origin } = new URL(request.url);
	if (origin !== location.origin) return;
	if (request.mode === "navigate" && placeIn(pathname) && !pathname.includes("/photos/"))
		event.respondWith(answerPage(request));
	else if (pathname.startsWith("/assets/")) event.respondWith(answerAsset(request));
});

/** The page for no signal, and what it names. What an earlier one needed is let go. */
async function takeAlong(): Promise<void> {
	const page = await fetch(offlinePage, { credentials: "omit" });
	if (!page.ok) throw new Error("the page for no signal did not come");
	const html = await page.clone().text();
	const assets = [...html.matchAll(/(?:src|href)="(\/assets\/[^"]+)"/g)].map((match) => match[1]!);
	const cache = await caches.open(cacheName);
	await cache.addAll([...new Set(assets)]);
	await cache.put(offlinePage, page);
	for (const old of await cache.keys()) {
		const { pathname } = new URL(old.url);
		if (pathname !== offlinePage && !assets.includes(pathname)) await cache.delete(old);
	}
}

async function answerAsset(request: Request): Promise<Response> {
	const held = await caches.match(request.url, { cacheName });
	return held ?? fetch(request);
}

async function answerPage(request: Request): Promise<Response> {
	const isPost = request.method === "POST";
	const answer = await fromServer(request, isPost ? patience.POST : patience.GET);
	if (answer) return answer;
	// What was sent may have arrived or not; the phone holds it under the name it was sent with, and goes on from there.
	if (isPost) return Response.redirect(`${request.url.split("#")[0]}#continue`, 303);
	return (await caches.match(offlinePage, { cacheName })) ?? Response.error();
}

/** @returns undefined when no answer came, or one from something in between that stands in for an absent server. */
async function fromServer(request: Request, most: number): Promise<Response | undefined> {
	const late = new Promise<undefined>((resolve) => setTimeout(() => resolve(undefined), most));
	const answer = await Promise.race([fetch(request).catch(() => undefined), late]);
	return answer && [502, 503, 504].includes(answer.status) ? undefined : answer;
}

/** Signal is back while no page is open. A failure makes the browser try again later. */
async function sendAll(): Promise<void> {
	const store = await openStore();
	for (const { responseId } of await store.list()) {
		await sendWaiting(store, responseId, () => {});
		await sendPhotos(store, responseId, () => {});
		await sendIn(store, responseId);
		const held = await store.read(responseId);
		if (held && (nextToSend(held.outbox) ?? nextPhoto(held.outbox))) throw new Error("not all was sent");
	}
}
