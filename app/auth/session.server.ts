import { createHash, randomBytes } from "node:crypto";
import { createContext, createCookie, createSessionStorage, type MiddlewareFunction, type Session } from "react-router";
import { env } from "#app/lib/env.server.ts";
import { holderOf } from "./holder.server.ts";
import { scopedTransaction } from "./scope.server.ts";

export type ToastMessage = { key: string; values?: Record<string, string | number>; tone?: "good" | "attention" };
type SessionData = { personId?: string; personalLinkId?: string };
type FlashData = { toast?: ToastMessage };
export type VisitorSession = Session<SessionData, FlashData>;

export const sessionIdleHours = 12;
export const sessionDays = 14;

let storage: ReturnType<typeof createStorage> | undefined;

function sessionCookie() {
	const secure = env().BASE_URL.startsWith("https:");
	return createCookie(secure ? "__Host-tallygrove" : "tallygrove", {
		httpOnly: true,
		sameSite: "lax",
		secure,
		path: "/",
		secrets: [env().SESSION_SECRET],
		maxAge: sessionDays * 86_400,
	});
}

function createStorage() {
	return createSessionStorage<SessionData, FlashData>({
		cookie: sessionCookie(),
		// The cookie holds a random id; the table holds its hash, so that a stolen table opens no session.
		async createData(data) {
			const id = randomBytes(32).toString("base64url");
			await write(id, data as SessionData & FlashData);
			return id;
		},
		async readData(id) {
			return scopedTransaction({ kind: "none" }, async (trx) => {
				const row = await trx
					.updateTable("auth.session")
					.set({ seen_at: new Date() })
					.where("session_hash", "=", hash(id))
					.where("expires_at", ">", new Date())
					.where("seen_at", ">", new Date(Date.now() - sessionIdleHours * 3_600_000))
					.returning("data")
					.executeTakeFirst();
				return (row?.data as SessionData | undefined) ?? null;
			});
		},
		async updateData(id, data) {
			await write(id, data as SessionData & FlashData);
		},
		async deleteData(id) {
			await scopedTransaction({ kind: "none" }, (trx) =>
				trx.deleteFrom("auth.session").where("session_hash", "=", hash(id)).execute(),
			);
		},
	});
}

function hash(id: string): string {
	return createHash("sha256").update(id).digest("base64url");
}

async function write(id: string, data: SessionData & FlashData): Promise<void> {
	const columns = {
		person_id: data.personId ?? null,
		personal_link_id: data.personalLinkId ?? null,
		data: JSON.stringify(data),
	};
	await scopedTransaction({ kind: "none" }, (trx) =>
		trx
			.insertInto("auth.session")
			.values({ session_hash: hash(id), ...columns, expires_at: new Date(Date.now() + sessionDays * 86_400_000) })
			.onConflict((conflict) => conflict.column("session_hash").doUpdateSet(columns))
			.execute(),
	);
}

/** Whose session it is or was, also after its end. It gives no rights. */
export async function findSessionHolder(cookies: string | null): Promise<string | undefined> {
	const id: unknown = await sessionCookie().parse(cookies);
	if (typeof id !== "string") return undefined;
	const row = await scopedTransaction({ kind: "none" }, (trx) =>
		trx
			.selectFrom("auth.session")
			.select(["person_id", "personal_link_id"])
			.where("session_hash", "=", hash(id))
			.executeTakeFirst(),
	);
	if (row?.person_id) return holderOf("person", row.person_id);
	return row?.personal_link_id ? holderOf("link", row.personal_link_id) : undefined;
}

export const sessionContext = createContext<VisitorSession>();

/**
 * Gives every request its session and writes it back once, only when it changed: reading a public page makes no row.
 * Must stand first among the root's middleware.
 */
export const sessionMiddleware: MiddlewareFunction<Response> = async ({ request, context }, next) => {
	storage ??= createStorage();
	const session = await storage.getSession(request.headers.get("cookie"));
	const before = JSON.stringify(session.data);
	context.set(sessionContext, session);
	const response = await next();
	const header = await changedCookie(session, before);
	if (header) response.headers.append("set-cookie", header);
	return response;
};

async function changedCookie(session: VisitorSession, before: string): Promise<string | null> {
	storage ??= createStorage();
	if (JSON.stringify(session.data) === before) return null;
	const fresh = await storage.getSession();
	const empty = Object.keys(session.data).length === 0;
	if (empty) return storage.destroySession(session);
	const previous = JSON.parse(before) as SessionData;
	const changedHands =
		previous.personId !== session.data.personId || previous.personalLinkId !== session.data.personalLinkId;
	if (!changedHands) return storage.commitSession(session);
	// A new id whenever rights change, so that an id planted before sign-in is worth nothing after it.
	if (session.id) await storage.destroySession(session);
	for (const [key, value] of Object.entries(session.data)) fresh.set(key as never, value as never);
	return storage.commitSession(fresh);
}
