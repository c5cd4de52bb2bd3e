/** An answer's bytes as they are sent, and where what follows it is. */
export type Body = { bytes: Uint8Array<ArrayBuffer>; next: string | null };

/** Bytes that a process keeps in all, and of one answer: a few dozen pages of a large release. */
const most = { inAll: 32e6, each: 6e6 };

/**
 * Bodies of answers by their tag. A tag is made of all that an answer depends on, so one that was made for it stays right; who
 * may have it is decided before, at each request. What was asked for longest ago goes first.
 */
const kept = new Map<string, Body>();
let bytesKept = 0;

export async function keptBody(
	etag: string,
	make: () => Promise<{ text: string; next?: string | null }>,
): Promise<Body> {
	const known = kept.get(etag);
	if (known) {
		kept.delete(etag);
		kept.set(etag, known);
		return known;
	}
	const { text, next = null } = await make();
	const body = { bytes: new TextEncoder().encode(text), next };
	if (body.bytes.length <= most.each && !kept.has(etag)) keep(etag, body);
	return body;
}

function keep(etag: string, body: Body): void {
	kept.set(etag, body);
	bytesKept += body.bytes.length;
	for (const [oldest, { bytes }] of kept) {
		if (bytesKept <= most.inAll) return;
		kept.delete(oldest);
		bytesKept -= bytes.length;
	}
}
