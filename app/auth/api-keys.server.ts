import { createHash, randomBytes } from "node:crypto";
import { sql } from "kysely";
import { z } from "zod";
import { logEvent } from "./event-log.server.ts";
import { grantHolds } from "./grant-holds.server.ts";
import { scopedTransaction } from "./scope.server.ts";
import type { Researcher } from "./viewer.ts";

export const keyScopes = ["figures", "files"] as const;
export type KeyScope = (typeof keyScopes)[number];
/** Days that a key can be made for: none lives for ever, since a lost one would too. */
export const keyDays = ["30", "90", "365"] as const;
/** More than anybody needs at once; a program that makes keys in a loop ends here. */
const mostKeys = 20;

export const ApiKeyForm = z.object({
	label: z.string({ error: "empty" }).trim().min(1, "empty").max(80, "too_long"),
	scopes: z.preprocess(
		(given) => (given === undefined ? [] : Array.isArray(given) ? given : [given]),
		z.array(z.enum(keyScopes, "wrong")).min(1, "choose_some"),
	),
	days: z.enum(keyDays, "wrong"),
});
export const RevokeForm = z.object({ apiKeyId: z.uuid("wrong") });

export type ApiKey = {
	apiKeyId: string;
	label: string;
	keyStart: string;
	scopes: KeyScope[];
	createdAt: Date;
	expiresAt: Date;
	revokedAt: Date | null;
	lastUsedAt: Date | null;
};

const hash = (key: string) => createHash("sha256").update(key).digest("base64url");

/** Makes a key of 256 random bits. It is told this once; what is kept is its hash. */
export function makeApiKey(
	researcher: Researcher,
	{ label, scopes, days }: z.infer<typeof ApiKeyForm>,
): Promise<{ key: string } | "too_many_keys"> {
	const key = `tally_${randomBytes(32).toString("base64url")}`;
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const { personId } = researcher;
		await sql`select pg_advisory_xact_lock(hashtext(${`api_key:${personId}`}))`.execute(trx);
		const { held } = await trx
			.selectFrom("auth.api_key")
			.select((eb) => eb.fn.countAll<number>().as("held"))
			.where("person_id", "=", personId)
			.where("revoked_at", "is", null)
			.where("expires_at", ">", new Date())
			.executeTakeFirstOrThrow();
		if (held >= mostKeys) return "too_many_keys";
		const { api_key_id } = await trx
			.insertInto("auth.api_key")
			.values({
				person_id: personId,
				label,
				key_start: key.slice(0, 10),
				key_hash: hash(key),
				scopes: [...new Set(scopes)],
				expires_at: new Date(Date.now() + Number(days) * 86_400_000),
			})
			.returning("api_key_id")
			.executeTakeFirstOrThrow();
		await logEvent(trx, { personId, action: "key.made", subjectKind: "key", subjectId: api_key_id });
		return { key };
	});
}

/** A researcher's own keys, the newest first. */
export function listApiKeys(researcher: Researcher): Promise<ApiKey[]> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const rows = await trx
			.selectFrom("auth.api_key")
			.select(["api_key_id", "label", "key_start", "scopes", "created_at", "expires_at", "revoked_at", "last_used_at"])
			.where("person_id", "=", researcher.personId)
			.orderBy("created_at", "desc")
			.orderBy("api_key_id")
			.limit(200)
			.execute();
		return rows.map((row) => ({
			apiKeyId: row.api_key_id,
			label: row.label,
			keyStart: row.key_start,
			scopes: row.scopes as KeyScope[],
			createdAt: row.created_at,
			expiresAt: row.expires_at,
			revokedAt: row.revoked_at,
			lastUsedAt: row.last_used_at,
		}));
	});
}

/** Ends a key at once. Another person's is not found; ending one twice changes nothing. */
export function revokeApiKey(researcher: Researcher, apiKeyId: string): Promise<"revoked" | "not_found"> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const { personId } = researcher;
		const own = await trx
			.selectFrom("auth.api_key")
			.select("revoked_at")
			.where("api_key_id", "=", apiKeyId)
			.where("person_id", "=", personId)
			.executeTakeFirst();
		if (!own) return "not_found";
		if (own.revoked_at) return "revoked";
		await trx
			.updateTable("auth.api_key")
			.set({ revoked_at: new Date() })
			.where("api_key_id", "=", apiKeyId)
			.where("revoked_at", "is", null)
			.execute();
		await logEvent(trx, { personId, action: "key.revoked", subjectKind: "key", subjectId: apiKeyId });
		return "revoked";
	});
}

export type KnownKey = { apiKeyId: string; scopes: KeyScope[] };

/**
 * Whose key a request carries, or why it opens nothing. A key rests while its owner is no approved researcher and opens again
 * with the next approval, unless its own days are over by then: nobody else has had it. That it was used is noted once a minute
 * at most, so that reading stays reading.
 */
export function checkApiKey(key: string): Promise<KnownKey | "not_valid" | "expired" | "access_ended"> {
	return scopedTransaction({ kind: "none" }, async (trx) => {
		const row = await trx
			.selectFrom("auth.api_key as k")
			.select(["k.api_key_id", "k.scopes", "k.expires_at", "k.last_used_at"])
			.select((eb) =>
				eb
					.exists(
						eb
							.selectFrom("auth.role_grant as g")
							.select("g.role_grant_id")
							.whereRef("g.person_id", "=", "k.person_id")
							.where("g.role", "=", "researcher")
							.where(grantHolds("g")),
					)
					.as("approved"),
			)
			.where("k.key_hash", "=", hash(key))
			.where("k.revoked_at", "is", null)
			.executeTakeFirst();
		if (!row) return "not_valid";
		if (row.expires_at <= new Date()) return "expired";
		if (!row.approved) return "access_ended";
		if (!row.last_used_at || row.last_used_at.getTime() < Date.now() - 60_000) {
			await trx
				.updateTable("auth.api_key")
				.set({ last_used_at: new Date() })
				.where("api_key_id", "=", row.api_key_id)
				.execute();
		}
		return { apiKeyId: row.api_key_id, scopes: row.scopes as KeyScope[] };
	});
}
