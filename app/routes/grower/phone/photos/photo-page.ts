import { mostPhotos, type PhotoProblem, tooMany } from "#app/collect/photo.ts";
import { withoutPhoto, withPhoto } from "#app/collect/photos-here.ts";
import { type AskPage, newHeld } from "../ask-page.ts";
import { change, type Sending } from "../send.ts";
import { askToSendLater } from "../send-later.ts";
import { sendPhotos, takeAway } from "../send-photos.ts";
import type { Held } from "../store.ts";
import { makeRow, type PhotoRow, type PhotoShown } from "./photo-row.ts";
import type { PhotoWords } from "./photo-words.ts";
import { shrink, type Shrunk } from "./shrink.ts";

/** Milliseconds until what could not be sent is tried again. */
const retry = 15_000;

type PhotoPage = {
	ask: AskPage;
	words: PhotoWords;
	questionKey: string;
	shown: { photo: PhotoShown; row: PhotoRow }[];
	sending: Sending | undefined;
	/** Files take turns, as drawing several at once can be more than a phone has room for. */
	turn: Promise<unknown>;
	busy: number;
};

/**
 * A screen for photos: what is taken or chosen is drawn small, kept on the phone at once, and sent while there is signal,
 * with a word on each. Photos that the phone still holds from before are in the list too.
 */
export async function startPhotoPage(ask: AskPage): Promise<void> {
	const place = document.getElementById("photos-here");
	if (!place?.dataset.words) return;
	const { words, questionKey } = JSON.parse(place.dataset.words) as { words: PhotoWords; questionKey: string };
	const page: PhotoPage = { ask, words, questionKey, shown: [], sending: "sent", turn: Promise.resolve(), busy: 0 };
	ask.form.dataset.scripted = "";
	for (const label of ask.form.querySelectorAll<HTMLElement>("label[data-button]"))
		label.className = label.dataset.button ?? "";
	await showHeld(page);
	listen(page);
	void send(page);
}

function listen(page: PhotoPage): void {
	const { form, signal } = page.ask;
	for (const box of form.querySelectorAll<HTMLInputElement>("input[type=file]")) {
		box.addEventListener("change", () => chosen(page, box), { signal });
		// Whoever chose before this script had come, chose already.
		if (box.files?.length) chosen(page, box);
	}
	// Before the listeners that let the page go.
	form.addEventListener("submit", (event) => hold(page, event), { capture: true, signal });
	window.addEventListener("beforeunload", (event) => page.busy > 0 && event.preventDefault(), { signal });
	window.addEventListener("online", () => void send(page), { signal });
	window.addEventListener("offline", () => void send(page), { signal });
	const isStuck = () => page.sending === "no_signal" || page.sending === "session_over";
	const timer = window.setInterval(() => isStuck() && void send(page), retry);
	signal?.addEventListener("abort", () => window.clearInterval(timer));
}

/** Going on waits for photos that are still being drawn; one that the server holds is taken away without leaving. */
function hold(page: PhotoPage, event: SubmitEvent): void {
	const { form } = page.ask;
	const submitter = event.submitter as HTMLButtonElement | null;
	const removes = submitter?.name === "_remove";
	if (!removes && page.busy === 0) return;
	event.preventDefault();
	event.stopImmediatePropagation();
	if (removes) void removeKept(page, submitter);
	else void page.turn.then(() => form.requestSubmit(submitter));
}

async function removeKept(page: PhotoPage, button: HTMLButtonElement): Promise<void> {
	const gone = await takeAway(page.ask.page, button.value);
	if (gone) button.closest("li")?.remove();
	say(gone ? page.words.removed : page.words.noSignal);
}

function chosen(page: PhotoPage, box: HTMLInputElement): void {
	const files = [...(box.files ?? [])];
	box.value = "";
	complain([]);
	const work = async () => {
		const problems: string[] = [];
		for (const file of files) {
			const problem = await add(page, file);
			if (problem) problems.push(`${file.name}: ${page.words.problems[problem.code] ?? ""}`);
		}
		complain(problems);
		page.busy -= 1;
		say("");
		void send(page);
	};
	page.busy += 1;
	say(page.words.making);
	page.turn = page.turn.then(work, work);
}

async function add(page: PhotoPage, file: File): Promise<PhotoProblem | undefined> {
	if (countOf(page) >= mostPhotos) return tooMany;
	const shrunk = await shrink(file);
	if ("code" in shrunk) return shrunk;
	await keep(page, shrunk);
}

function countOf({ shown }: PhotoPage): number {
	const here = shown.filter(({ photo }) => photo.state !== "removed").length;
	return here + document.querySelectorAll("#photos-kept > li").length;
}

/** Keeps a photo on the phone, and shows it. */
async function keep(page: PhotoPage, { bytes, preview }: Shrunk): Promise<void> {
	const { store, page: asked } = page.ask;
	const photoId = crypto.randomUUID();
	const photo = {
		photoId,
		stepKey: asked.stepKey,
		questionKey: page.questionKey,
		sizeBytes: bytes.byteLength,
		problem: null,
	};
	await store.change(
		asked.responseId,
		(held) => {
			const now = held ?? newHeld(asked);
			return { ...now, outbox: withPhoto(now.outbox, photo) };
		},
		{ photoId, bytes, preview },
	);
	const lasting = (await store.readPicture(photoId))?.lasting ?? false;
	show(page, { photoId, bytes, preview, state: "waiting", part: null, problem: null, lasting });
}

async function showHeld(page: PhotoPage): Promise<void> {
	const { store, page: asked } = page.ask;
	const held = await store.read(asked.responseId);
	for (const { photoId, stepKey, problem } of held?.outbox.photos ?? []) {
		const picture = await store.readPicture(photoId);
		if (!picture) {
			await change(store, asked.responseId, (outbox) => withoutPhoto(outbox, photoId));
			say(page.words.lost);
		} else if (stepKey === asked.stepKey) {
			const { bytes, preview, lasting } = picture;
			show(page, { photoId, bytes, preview, state: problem ? "refused" : "waiting", part: null, problem, lasting });
		}
	}
}

function show(page: PhotoPage, photo: PhotoShown): void {
	const row = makeRow(photo.preview, countOf(page) + 1, page.words, () => void press(page, photo));
	page.shown.push({ photo, row });
	row.show(photo, page.sending);
	document.getElementById("photos-here")?.append(row.element);
}

/** Takes a photo away, or, pressed again, takes that back. */
async function press(page: PhotoPage, photo: PhotoShown): Promise<void> {
	const { store, page: asked } = page.ask;
	if (photo.state === "removed") {
		if (countOf(page) >= mostPhotos) {
			complain([page.words.problems[tooMany.code] ?? ""]);
			return;
		}
		page.shown.find((one) => one.photo === photo)?.row.element.remove();
		page.shown = page.shown.filter((one) => one.photo !== photo);
		await keep(page, photo);
		await send(page);
		return;
	}
	if (photo.state === "sent" && !(await takeAway(asked, photo.photoId))) {
		say(page.words.noSignal);
		return;
	}
	photo.state = "removed";
	draw(page, await change(store, asked.responseId, (outbox) => withoutPhoto(outbox, photo.photoId)));
}

async function send(page: PhotoPage): Promise<void> {
	const { store, page: asked } = page.ask;
	if (navigator.onLine) {
		page.sending = undefined;
		page.sending = await sendPhotos(store, asked.responseId, (held, onTheWay) => draw(page, held, onTheWay));
	} else page.sending = "no_signal";
	if (page.sending === "no_signal") askToSendLater();
	draw(page, await store.read(asked.responseId));
}

/** Says of each photo what has become of it: one that the phone holds no more has been sent. */
function draw(page: PhotoPage, held: Held | undefined, onTheWay?: { photoId: string; part: number }): void {
	if (page.ask.signal?.aborted) return;
	const waiting = new Map(held?.outbox.photos.map((photo) => [photo.photoId, photo]));
	for (const { photo, row } of page.shown) {
		const here = waiting.get(photo.photoId);
		photo.part = onTheWay?.photoId === photo.photoId ? onTheWay.part : null;
		photo.problem = here?.problem ?? null;
		if (photo.state !== "removed") photo.state = here ? (here.problem ? "refused" : "waiting") : "sent";
		row.show(photo, page.sending);
	}
}

function say(text: string): void {
	const place = document.getElementById("photos-word");
	if (place) place.textContent = text;
}

/** Why files were not taken, beside the boxes they were chosen in. */
function complain(problems: string[]): void {
	const place = document.getElementById("photos-problem");
	place?.replaceChildren(...problems.map((text) => Object.assign(document.createElement("p"), { textContent: text })));
}
