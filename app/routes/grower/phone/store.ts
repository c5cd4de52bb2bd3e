import { emptyOutbox, type Outbox } from "#app/collect/outbox.ts";
import { isPack, type Pack } from "./pack.ts";

/** What a phone holds of one response. Only the response's own pages ask for it, by its id. */
export type Held = {
	responseId: string;
	/** Where its pages are. */
	surveyId: string;
	operationId: string;
	/** Whose session its pages were last opened in, as a short hash. */
	holder: string;
	outbox: Outbox;
};

/** The picture of a photo that waits, and a small one to show. */
export type PictureHere = { photoId: string; bytes: ArrayBuffer; preview: string };

/** A phone's store of what was typed. Without room for one it lasts as long as the page does, and says so. */
export type PhoneStore = {
	lasting(): boolean;
	read(responseId: string): Promise<Held | undefined>;
	list(): Promise<Held[]>;
	/**
	 * Changes what is held in one step that no other page of the phone comes between. Undefined from `next` forgets it.
	 * `picture` is that of a photo which `next` adds; those of photos which it leaves out are forgotten.
	 */
	change(
		responseId: string,
		next: (held: Held | undefined) => Held | undefined,
		picture?: PictureHere,
	): Promise<Held | undefined>;
	/** Undefined where it was lost, with a page that had no room to keep it. */
	readPicture(photoId: string): Promise<(PictureHere & { lasting: boolean }) | undefined>;
	/** What the pages of opened surveys are drawn from while there is no signal. */
	listPacks(): Promise<Pack[]>;
	putPack(pack: Pack): Promise<void>;
	dropPack(responseId: string): Promise<void>;
};

export async function openStore(): Promise<PhoneStore> {
	const memory = new Map<string, Held>();
	const memoryPictures = new Map<string, PictureHere>();
	let database = await open().catch(() => null);
	/** What the database cannot do, memory does from then on. */
	async function orMemory<T>(inDatabase: (at: IDBDatabase) => Promise<T>, inMemory: () => T): Promise<T> {
		if (database) {
			try {
				return await inDatabase(database);
			} catch {
				database = null;
			}
		}
		return inMemory();
	}
	return {
		lasting: () => database !== null,
		read: (responseId) =>
			orMemory(
				async (at) => readable(await done(at.transaction(name).objectStore(name).get(responseId))),
				() => memory.get(responseId),
			),
		list: () =>
			orMemory(
				async (at) =>
					(await done(at.transaction(name).objectStore(name).getAll())).flatMap((one) => readable(one) ?? []),
				() => [...memory.values()],
			),
		change: (responseId, next, picture) => {
			const remember = (held: Held | undefined) => {
				if (held) memory.set(responseId, held);
				else memory.delete(responseId);
				return held;
			};
			if (picture) memoryPictures.set(picture.photoId, picture);
			return orMemory(
				async (at) => {
					const whole = await changeIn(at, responseId, next, picture).catch(() => null);
					// A phone that has no room for a picture may still have some for all that is typed.
					if (whole === null) return remember(await changeIn(at, responseId, next));
					if (picture) memoryPictures.delete(picture.photoId);
					return remember(whole);
				},
				() => remember(next(memory.get(responseId))),
			);
		},
		readPicture: async (photoId) => {
			const here = memoryPictures.get(photoId);
			if (here || !database) return here && { ...here, lasting: false };
			const found = await done(database.transaction(pictures).objectStore(pictures).get(photoId)).catch(
				() => undefined,
			);
			return isPicture(found) ? { ...found, lasting: true } : undefined;
		},
		// A survey that is not there without signal is no loss: nothing typed is in it.
		listPacks: async () => (database ? await listPacks(database).catch(() => []) : []),
		putPack: async (pack) => void (database && (await writePack(database, (at) => at.put(pack)))),
		dropPack: async (responseId) => void (database && (await writePack(database, (at) => at.delete(responseId)))),
	};
}

const name = "held";
const packs = "packs";
const pictures = "pictures";

function open(): Promise<IDBDatabase> {
	const request = indexedDB.open("tallygrove-answers", 2);
	request.addEventListener("upgradeneeded", () => {
		const keyPaths = { [name]: "responseId", [packs]: "responseId", [pictures]: "photoId" };
		for (const [store, keyPath] of Object.entries(keyPaths))
			if (!request.result.objectStoreNames.contains(store)) request.result.createObjectStore(store, { keyPath });
	});
	// A page of a newer version that is opened beside this one must not wait for it.
	request.addEventListener("success", () => {
		request.result.addEventListener("versionchange", () => request.result.close());
	});
	return done(request);
}

async function listPacks(database: IDBDatabase): Promise<Pack[]> {
	const found = await done<unknown[]>(database.transaction(packs).objectStore(packs).getAll());
	return found.filter(isPack);
}

async function writePack(database: IDBDatabase, write: (at: IDBObjectStore) => IDBRequest): Promise<void> {
	await done(write(database.transaction(packs, "readwrite").objectStore(packs))).catch(() => undefined);
}

function done<T>(request: IDBRequest<T>): Promise<T> {
	return new Promise((resolve, reject) => {
		request.addEventListener("success", () => resolve(request.result));
		request.addEventListener("error", () => reject(request.error ?? new Error("the store refused")));
		request.addEventListener("blocked", () => reject(new Error("the store is blocked")));
	});
}

function changeIn(
	database: IDBDatabase,
	responseId: string,
	next: (held: Held | undefined) => Held | undefined,
	picture?: PictureHere,
): Promise<Held | undefined> {
	// Strict: told to be kept only when it is on the disk, as a phone in an orchard may run empty.
	const transaction = database.transaction([name, pictures], "readwrite", { durability: "strict" });
	const [store, shown] = [transaction.objectStore(name), transaction.objectStore(pictures)];
	let result: Held | undefined;
	store.get(responseId).addEventListener("success", ({ target }) => {
		const before = readable((target as IDBRequest<unknown>).result);
		result = next(before);
		if (result) store.put(result);
		else store.delete(responseId);
		const kept = new Set(result?.outbox.photos.map(({ photoId }) => photoId));
		for (const { photoId } of before?.outbox.photos ?? []) if (!kept.has(photoId)) shown.delete(photoId);
		if (picture) shown.put(picture);
	});
	return new Promise((resolve, reject) => {
		transaction.addEventListener("complete", () => resolve(result));
		transaction.addEventListener("abort", () => reject(transaction.error ?? new Error("the store has no room")));
	});
}

/** What an older version of these pages wrote, or a broken disk, counts as nothing: never a page that cannot be shown. */
function readable(found: unknown): Held | undefined {
	const held = found as Partial<Held> | undefined;
	if (typeof held?.responseId !== "string" || typeof held.surveyId !== "string") return undefined;
	if (typeof held.operationId !== "string" || typeof held.holder !== "string") return undefined;
	const { count, steps } = held.outbox ?? {};
	const isWhole =
		typeof count === "number" &&
		typeof steps === "object" &&
		Object.values(steps).every(
			(step) => typeof step?.changeId === "string" && typeof step.seen === "number" && Array.isArray(step.unsure),
		);
	const photos = held.outbox?.photos;
	const outbox = isWhole ? held.outbox! : emptyOutbox;
	return { ...(held as Held), outbox: { ...outbox, photos: Array.isArray(photos) ? photos : [] } };
}

function isPicture(found: unknown): found is PictureHere {
	const picture = found as Partial<PictureHere> | undefined;
	return picture?.bytes instanceof ArrayBuffer && typeof picture.preview === "string";
}
