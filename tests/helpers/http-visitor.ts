export type Answered = { status: number; location: string; text: string };

/** A kept connection that the server has closed, as after a refused upload, is no answer: browsers ask again on a new one. */
async function fetchAsBrowsersDo(url: URL, init: RequestInit): Promise<Response> {
	try {
		return await fetch(url, init);
	} catch (error) {
		const code = ((error as Error).cause as { code?: string } | undefined)?.code ?? "";
		if (!["UND_ERR_SOCKET", "ECONNRESET", "EPIPE"].includes(code)) throw error;
		return fetch(url, init);
	}
}

/** Somebody without a browser, or without scripts in it: keeps cookies, posts forms, follows nothing by itself. */
export function httpVisitor(baseUrl: string, language = "en", headers: Record<string, string> = {}) {
	const jar = new Map<string, string>();
	async function send(address: string, init: RequestInit = {}): Promise<Answered> {
		const url = new URL(address, baseUrl);
		const response = await fetchAsBrowsersDo(url, {
			...init,
			redirect: "manual",
			headers: {
				cookie: [...jar].map((pair) => pair.join("=")).join("; "),
				origin: url.origin,
				"accept-language": language,
				...headers,
			},
		});
		for (const line of response.headers.getSetCookie()) {
			const [, name, value] = /^([^=]+)=([^;]*)/.exec(line) ?? [];
			if (name) jar.set(name, value ?? "");
		}
		const location = response.headers.get("location");
		return {
			status: response.status,
			location: location ? new URL(location, url).href : "",
			text: await response.text(),
		};
	}
	return {
		send,
		get: (address: string) => send(address),
		post: (address: string, fields: Record<string, string>) =>
			send(address, { method: "POST", body: new URLSearchParams(fields) }),
	};
}
