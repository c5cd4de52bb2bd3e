import { createHash } from "node:crypto";
import { sentByHeader, sentByParam } from "#app/lib/sent-by.ts";

/** Tells the pages and sessions of one person or link from those of another, and nothing else. */
export function holderOf(what: "link" | "person", id: string): string {
	return createHash("sha256").update(`${what} ${id}`).digest("base64url").slice(0, 16);
}

/** Whose page a form was sent from, where it says so: scripts tell it in a header, forms held without them in their address. */
export function senderOf(request: Request): string | null {
	return request.headers.get(sentByHeader) ?? new URL(request.url).searchParams.get(sentByParam);
}
