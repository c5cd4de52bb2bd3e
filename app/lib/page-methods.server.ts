import type { MiddlewareFunction } from "react-router";
import { isForApi } from "./readable-request.server.ts";
import { refusal } from "./refusal.ts";

// What pages, their forms and the phone's photos are asked with.
const taken = new Set(["GET", "HEAD", "POST", "DELETE"]);

/** Refuses methods that no page takes, and tells with every such refusal which it does: an answer of 405 has to. */
export const pageMethods: MiddlewareFunction<Response>[] = [
	async ({ request }, next) => {
		const response = await next();
		if (response.status === 405 && !response.headers.has("allow"))
			response.headers.set("allow", taken.has(request.method) ? "GET, HEAD" : "GET, HEAD, POST");
		return response;
	},
	({ request }, next) => {
		if (!taken.has(request.method) && !isForApi(new URL(request.url).pathname)) throw refusal("method_not_allowed");
		return next();
	},
];
