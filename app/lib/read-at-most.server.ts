/** Reads a request's body, unless it is longer than `most` bytes: then no more than that is ever held. */
export async function readAtMost(request: Request, most: number): Promise<Uint8Array | undefined> {
	const pieces: Uint8Array[] = [];
	let length = 0;
	for await (const piece of bodyOf(request)) {
		length += piece.length;
		if (length > most) return undefined;
		pieces.push(piece);
	}
	return Buffer.concat(pieces);
}

/** Lets what is left of a body pass by, unheld: a browser reads no answer before it has sent all. */
export async function letPass(request: Request, most: number): Promise<void> {
	let length = 0;
	for await (const piece of bodyOf(request)) {
		length += piece.length;
		if (length > most) return;
	}
}

async function* bodyOf({ body }: Request): AsyncGenerator<Uint8Array> {
	if (!body || body.locked) return;
	const reader = body.getReader();
	try {
		for (;;) {
			const { done, value } = await reader.read();
			if (done) return;
			yield value;
		}
	} finally {
		reader.releaseLock();
	}
}
