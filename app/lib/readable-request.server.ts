import { subscribe } from "node:diagnostics_channel";
import type { IncomingMessage } from "node:http";

const methods = new Set(["GET", "HEAD", "OPTIONS", "POST", "PUT", "PATCH", "DELETE"]);
const formType = "application/x-www-form-urlencoded";
const isForm = /^(application\/x-www-form-urlencoded|multipart\/form-data)\b/i;

/**
 * Four kinds of request would be refused before any code of ours sees them, as a page of the server's own or as a fault: an
 * address with a percent sign that begins no character; one that searches for the character of code 0, which the database
 * cannot read; a method that no web request can have, or that only programs ask
 * the API with; and a form that does not say that it is one. Node tells of a request before it is handled, so each is made
 * into one that can be read, and is refused in the product's own words.
 */
export function makeRequestsReadable(): void {
	subscribe("http.server.request.start", (message) => {
		const { request } = message as { request: IncomingMessage };
		request.url = readableAddress(request.url ?? "/");
		const forApi = isForApi(request.url);
		// Nothing takes this one: the API only reads, and for pages see `pageMethods`.
		if (!methods.has(request.method ?? "") || (request.method === "OPTIONS" && !forApi)) request.method = "PUT";
		// Fields are then missing, which the page can say.
		if (!forApi && !isForm.test(request.headers["content-type"] ?? "")) request.headers["content-type"] = formType;
	});
}

/** Whether an address is one for programs, which are refused in the API's way. */
export function isForApi(address: string): boolean {
	return address.startsWith("/api/");
}

/** An address with the percent signs of a path that cannot be read taken as they stand, and nothing that no database can read. */
export function readableAddress(address: string): string {
	const end = address.indexOf("?");
	const path = end === -1 ? address : address.slice(0, end);
	const search = address.slice(path.length).replaceAll("%00", "");
	return (isReadable(path) ? path : path.replaceAll("%", "%25")) + search;
}

function isReadable(path: string): boolean {
	try {
		// Compared, since a build leaves out a call whose value nobody uses.
		return decodeURIComponent(path) !== "";
	} catch {
		return false;
	}
}
