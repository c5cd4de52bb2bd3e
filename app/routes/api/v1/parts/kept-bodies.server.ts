import { KeptBySize } from "#app/lib/kept-by-size.ts";

/** An answer's bytes as they are sent, and where what follows it is. */
export type Body = { bytes: Uint8Array<ArrayBuffer>; next: string | null };

/**
 * Bodies of answers by their tag: a few dozen pages of a large release. A tag is made of all that an answer depends on, so one
 * that was made for it stays right; who may have it is decided before, at each request.
 */
const kept = new KeptBySize<Body>({ inAll: 32e6, each: 6e6 });

/** What is to be sent, as a text or as bytes, and the address of what follows. */
export type MadeBody = { content: string | Uint8Array<ArrayBuffer>; next?: string | null };

export async function keptBody(etag: string, make: () => Promise<MadeBody>): Promise<Body> {
	const known = kept.get(etag);
	if (known) return known;
	const { content, next = null } = await make();
	const body = { bytes: typeof content === "string" ? new TextEncoder().encode(content) : content, next };
	kept.keep(etag, body, body.bytes.length);
	return body;
}
