import { brokenPhoto, type PhotoProblem } from "#app/collect/photo.ts";
import { nextPhoto, type PhotoHere, withoutPhoto, withRefusedPhoto } from "#app/collect/photos-here.ts";
import { change, type Sending, type Stopped, whyNot } from "./send.ts";
import type { Held, PhoneStore } from "./store.ts";

/** Bytes of a piece: small enough for one bar of signal, and twice as many each time one was gone within a second. */
const pieceBytes = { first: 64 * 1024, most: 512 * 1024 };

/** Told when a photo has come on, by which part of it, and when what is held of photos has changed. */
type Tell = (held: Held, onTheWay?: { photoId: string; part: number }) => void;

/**
 * Sends the photos that wait, one after the other. Typed answers do not wait for them; only one page of the phone sends
 * photos at a time, with the service worker.
 */
export function sendPhotos(store: PhoneStore, responseId: string, tell: Tell): Promise<Sending> {
	const send = () => sendInTurn(store, responseId, tell);
	return navigator.locks ? navigator.locks.request("tallygrove-photos", send) : send();
}

async function sendInTurn(store: PhoneStore, responseId: string, tell: Tell): Promise<Sending> {
	for (;;) {
		const held = await store.read(responseId);
		const photo = held && nextPhoto(held.outbox);
		if (!held || !photo) return "sent";
		const reply = await sendOne(store, held, photo, tell);
		if (typeof reply === "string") return reply;
		const { photoId } = photo;
		// It was taken away while its last piece was on the way.
		if (!reply.problem && !isWanted(await store.read(responseId), photoId)) await takeAway(held, photoId);
		const next = await change(store, responseId, (outbox) =>
			reply.problem ? withRefusedPhoto(outbox, photoId, reply.problem) : withoutPhoto(outbox, photoId),
		);
		if (next) tell(next);
	}
}

/** @returns what the server made of the photo, or why the sending stopped. */
async function sendOne(
	store: PhoneStore,
	held: Held,
	photo: PhotoHere,
	tell: Tell,
): Promise<{ problem?: PhotoProblem } | Stopped> {
	const picture = await store.readPicture(photo.photoId);
	// It was in a page that had no room to keep it, and that page is gone: nothing is there to send.
	if (!picture) return {};
	let [offset, length] = [0, pieceBytes.first];
	for (;;) {
		if (!isWanted(await store.read(held.responseId), photo.photoId)) return {};
		tell(held, { photoId: photo.photoId, part: offset / picture.bytes.byteLength });
		const began = performance.now();
		const response = await postPiece(held, photo, picture.bytes, offset, length).catch(() => null);
		if (response?.status !== 200 && response?.status !== 400) {
			const why = await whyNot(response);
			return why === "refused" ? { problem: brokenPhoto } : why;
		}
		const answer = readAnswer(await response.json().catch(() => null));
		if (answer === undefined) return response.status === 400 ? { problem: brokenPhoto } : "no_signal";
		if (typeof answer !== "number") return answer;
		offset = answer;
		if (performance.now() - began < 1000) length = Math.min(length * 2, pieceBytes.most);
	}
}

function isWanted(held: Held | undefined, photoId: string): boolean {
	return held?.outbox.photos.some((photo) => photo.photoId === photoId) ?? false;
}

/** Takes a photo away at the server. @returns whether it is gone. */
export async function takeAway(held: Pick<Held, "surveyId" | "operationId">, photoId: string): Promise<boolean> {
	const signal = AbortSignal.timeout(20_000);
	const response = await fetch(addressOf(held, photoId), { method: "DELETE", redirect: "error", signal }).catch(
		() => null,
	);
	return response?.ok ?? false;
}

function postPiece(held: Held, photo: PhotoHere, bytes: ArrayBuffer, offset: number, length: number) {
	const piece = { questionKey: photo.questionKey, offset: String(offset), size: String(bytes.byteLength) };
	return fetch(`${addressOf(held, photo.photoId)}?${String(new URLSearchParams(piece))}`, {
		method: "POST",
		body: new Blob([bytes.slice(offset, offset + length)]),
		redirect: "error",
		signal: AbortSignal.timeout(60_000),
	});
}

/** A photo at the server. */
export function addressOf({ surveyId, operationId }: Pick<Held, "surveyId" | "operationId">, photoId: string): string {
	return `/answer/${surveyId}/${operationId}/photos/${photoId}`;
}

/** @returns how far the photo has come, or what became of it. */
function readAnswer(body: unknown): number | { problem?: PhotoProblem } | undefined {
	const answer = body as { offset?: unknown; kept?: unknown; problem?: Partial<PhotoProblem> } | null;
	if (typeof answer?.offset === "number") return answer.offset;
	if (answer?.kept === true) return {};
	return typeof answer?.problem?.code === "string" ? { problem: answer.problem as PhotoProblem } : undefined;
}
