import { createHash, timingSafeEqual } from "node:crypto";
import type { Account, Client } from "./request.ts";

const codeLifetime = 60_000;
const tokenLifetime = 3_600_000;

type Code = { account: Account; challenge: string; redirectUri: string; issuedAt: number };
export type TokenRequest = { grant_type?: string; code?: string; redirect_uri?: string; code_verifier?: string };

const digest = (text: string) => createHash("sha256").update(text).digest();

/** Compares in a time that tells nothing of where two texts differ. */
const same = (a: string, b: string): boolean => {
	return timingSafeEqual(digest(a), digest(b));
};

/** Whether a token request shows the client's id and secret, in a Basic header or in the body (RFC 6749 section 2.3.1). */
export function isClient(client: Client, header: string | undefined, body: Record<string, unknown>): boolean {
	const basic = /^Basic (.+)$/i.exec(header ?? "");
	if (!basic)
		return same(String(body.client_id ?? ""), client.id) && same(String(body.client_secret ?? ""), client.secret);
	const [id = "", secret = ""] = Buffer.from(basic[1] ?? "", "base64")
		.toString("utf8")
		.split(":");
	try {
		return same(decodeURIComponent(id), client.id) && same(decodeURIComponent(secret), client.secret);
	} catch {
		return false; // a broken percent sign
	}
}

/** Codes given out and tokens they were traded for. A code works once, within a minute, for whom it was made. */
export class Ledger {
	#codes = new Map<string, Code>();
	#tokens = new Map<string, { account: Account; issuedAt: number }>();
	#now: () => number;

	constructor(now: () => number = Date.now) {
		this.#now = now;
	}

	addCode(code: string, account: Account, challenge: string, redirectUri: string): void {
		for (const [old, { issuedAt }] of this.#codes) if (this.#now() - issuedAt > codeLifetime) this.#codes.delete(old);
		this.#codes.set(code, { account, challenge, redirectUri, issuedAt: this.#now() });
	}

	/** @returns the person, or undefined for whatever is wrong; a code that was tried is gone either way. */
	redeem({ code = "", redirect_uri, code_verifier = "" }: TokenRequest): Account | undefined {
		const known = this.#codes.get(code);
		this.#codes.delete(code);
		if (!known || this.#now() - known.issuedAt > codeLifetime || redirect_uri !== known.redirectUri) return undefined;
		const challenge = createHash("sha256").update(code_verifier).digest("base64url");
		return same(challenge, known.challenge) ? known.account : undefined;
	}

	addToken(token: string, account: Account): void {
		for (const [old, { issuedAt }] of this.#tokens)
			if (this.#now() - issuedAt > tokenLifetime) this.#tokens.delete(old);
		this.#tokens.set(token, { account, issuedAt: this.#now() });
	}

	findAccount(header: string | undefined): Account | undefined {
		const token = /^Bearer (\S+)$/i.exec(header ?? "")?.[1] ?? "";
		const known = this.#tokens.get(token);
		return known && this.#now() - known.issuedAt <= tokenLifetime ? known.account : undefined;
	}
}
