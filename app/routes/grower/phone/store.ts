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

/** A phone's store of what was typed. Without room for one it lasts as long as the page does, and says so. */
export type PhoneStore = {
	lasting(): boolean;
	read(responseId: string): Promise<Held | undefined>;
	list(): Promise<Held[]>;
	/** Changes what is held in one step that no other page of the phone comes between. Undefined from `next` forgets it. */
	change(responseId: string, next: (held: Held | undefined) => Held | undefined): Promise<Held | undefined>;
	/** What the pages of opened surveys are drawn from while there is no signal. */
	listPacks(): Promise<Pack[]>;
	putPack(pack: Pack): Promise<void>;
	dropPack(responseId: string): Promise<void>;
};

export async function openStore(): Promise<PhoneStore> {
	const memory = new Map<string, Held>();
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
		change: (responseId, next) => {
			const remember = (held: Held | undefined) => {
				if (held) memory.set(responseId, held);
				else memory.delete(responseId);
				return held;
			};
			return orMemory(
				async (at) => remember(await changeIn(at, responseId, next)),
				() => remember(next(memory.get(responseId))),
			);
		},
		// A survey that is not there without signal is no loss: nothing typed is in it.
		listPacks: async () => (database ? await listPacks(database).catch(() => []) : []),
		putPack: async (pack) => void (database && (await writePack(database, (at) => at.put(pack)))),
		dropPack: async (responseId) => void (database && (await writePack(database, (at) => at.delete(responseId)))),
	};
}

const name = "held";
const packs = "packs";

function open(): Promise<IDBDatabase> {
	const request = indexedDB.open("tallygrove-answers", 1);
	request.addEventListener("upgradeneeded", () => {
		for (const store of [name, packs]) request.result.createObjectStore(store, { keyPath: "responseId" });
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
): Promise<Held | undefined> {
	// Strict: told to be kept only when it is on the disk, as a phone in an orchard may run empty.
	const transaction = database.transaction(name, "readwrite", { durability: "strict" });
	const store = transaction.objectStore(name);
	let result: Held | undefined;
	store.get(responseId).addEventListener("success", ({ target }) => {
		result = next(readable((target as IDBRequest<unknown>).result));
		if (result) store.put(result);
		else store.delete(responseId);
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
	return { ...(held as Held), outbox: isWhole ? held.outbox! : emptyOutbox };
}
