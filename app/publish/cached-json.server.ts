import { createHash } from "node:crypto";

/** How long a copy may be used: `version` for an address that changes with its content, `figures` for one that may change. */
const caching = {
	version: "public, max-age=31536000, immutable",
	figures: "public, max-age=60, stale-while-revalidate=600",
	none: "no-store",
};

/** A strong entity tag of the bytes as served, so that it holds nothing that they do not. */
export function entityTag(body: string): string {
	return `"${createHash("sha256").update(body).digest("base64url").slice(0, 27)}"`;
}

/** JSON with a strong ETag: 304 without a body when the asker's copy is still the same. */
export function cachedJson(request: Request, body: string, keep: keyof typeof caching): Response {
	const headers = { "content-type": "application/json; charset=utf-8", "cache-control": caching[keep] };
	return unlessKept(request, entityTag(body), headers) ?? new Response(body, { headers: tagged(body, headers) });
}

const tagged = (body: string, headers: Record<string, string>) => ({ ...headers, etag: entityTag(body) });

/** What a figures' file is kept like: as long as the figures themselves. */
export const keptLikeFigures = { "cache-control": caching.figures };

/** The answer to who has this version already; null where the whole must be sent. */
export function unlessKept(request: Request, etag: string, headers: Record<string, string>): Response | null {
	if (!matches(request.headers.get("if-none-match"), etag)) return null;
	const { "content-type": _, ...kept } = headers;
	return new Response(null, { status: 304, headers: { ...kept, etag } });
}

/** A refusal of a resource route, after RFC 9457. Holds the status and its meaning only. */
export function problem(status: 400 | 404 | 410, title: string): Response {
	return new Response(JSON.stringify({ type: "about:blank", title, status }), {
		status,
		headers: { "content-type": "application/problem+json", "cache-control": caching.none },
	});
}

/** Whether `If-None-Match` names this version, weakly compared as a GET does (RFC 9110, 13.1.2). */
export function matches(header: string | null, etag: string): boolean {
	if (!header) return false;
	return header.split(",").some((tag) => ["*", etag, `W/${etag}`].includes(tag.trim()));
}
