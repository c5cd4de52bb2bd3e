import { PassThrough } from "node:stream";
import { createReadableStreamFromReadable } from "@react-router/node";
import { isbot } from "isbot";
import { renderToPipeableStream } from "react-dom/server";
import { I18nextProvider } from "react-i18next";
import { type EntryContext, type HandleErrorFunction, type RouterContextProvider, ServerRouter } from "react-router";
import { getInstance } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { log, withoutToken } from "#app/lib/log.server.ts";
import { makeRequestsReadable } from "#app/lib/readable-request.server.ts";
import { nonceContext } from "#app/lib/security-headers.server.ts";

// Read at start, so that a server with a missing or unsafe setting stops at once and says which.
env();
makeRequestsReadable();

export const streamTimeout = 10_000;

export default function handleRequest(
	request: Request,
	status: number,
	headers: Headers,
	routerContext: EntryContext,
	context: RouterContextProvider,
): Promise<Response> {
	const nonce = context.get(nonceContext);
	const wholePage = isbot(request.headers.get("user-agent") ?? "") || request.method === "HEAD";
	return new Promise((resolve, reject) => {
		let shellSent = false;
		let answerStatus = status;
		const { pipe, abort } = renderToPipeableStream(
			<I18nextProvider i18n={getInstance(context)}>
				<ServerRouter context={routerContext} url={request.url} nonce={nonce} />
			</I18nextProvider>,
			{ nonce, [wholePage ? "onAllReady" : "onShellReady"]: send, onShellError: reject, onError },
		);
		const timer = setTimeout(abort, streamTimeout + 1_000);

		function send() {
			shellSent = true;
			const body = new PassThrough({ final: (done) => (clearTimeout(timer), done()) });
			headers.set("content-type", "text/html; charset=utf-8");
			resolve(new Response(createReadableStreamFromReadable(body), { headers, status: answerStatus }));
			pipe(body);
		}
		function onError(error: unknown) {
			answerStatus = 500;
			if (shellSent) log.error({ error }, "page broke while streaming");
		}
	});
}

/** Unexpected errors are logged whole, for the reader gets one calm sentence; refusals are not errors. */
export const handleError: HandleErrorFunction = (error, { request }) => {
	if (request.signal.aborted) return;
	log.error({ err: error, method: request.method, url: withoutToken(new URL(request.url).pathname) }, "request failed");
};
