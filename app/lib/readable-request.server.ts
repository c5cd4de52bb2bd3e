import { subscribe } from "node:diagnostics_channel";
import type { IncomingMessage } from "node:http";

const methods = new Set(["GET", "HEAD", "OPTIONS", "POST", "PUT", "PATCH", "DELETE"]);

/**
 * Two kinds of request would be refused before any code of ours sees them, as a page of the server's own: an address with a
 * percent sign that begins no character, and under the API's address a method that no web request can have. Node tells of
 * a request before it is handled, so both are made into one that can be read, and refused in the API's own words.
 */
export function makeRequestsReadable(): void {
	subscribe("http.server.request.start", (message) => {
		const { request } = message as { request: IncomingMessage };
		request.url = readableAddress(request.url ?? "/");
		// The API only reads: it refuses this one as it refuses all that would change something.
		if (/^\/api(\/|$)/.test(request.url) && !methods.has(request.method ?? "")) request.method = "PUT";
	});
}

/** An address whose path cannot be read, with its percent signs taken as they stand; any other as it is. */
export function readableAddress(address: string): string {
	const end = address.indexOf("?");
	const path = end === -1 ? address : address.slice(0, end);
	return isReadable(path) ? address : path.replaceAll("%", "%25") + address.slice(path.length);
}

function isReadable(path: string): boolean {
	try {
		// Compared, since a build leaves out a call whose value nobody uses.
		return decodeURIComponent(path) !== "";
	} catch {
		return false;
	}
}
