import { createHash } from "node:crypto";
import type { TFunction } from "i18next";
import type { RouterContextProvider } from "react-router";
import type { z } from "zod";
import { checkApiKey, type KnownKey } from "#app/auth/api-keys.server.ts";
import { countRequest } from "#app/auth/api-limits.server.ts";
import { getInstance, getLanguage, getT } from "#app/i18n/middleware.server.ts";
import { env } from "#app/lib/env.server.ts";
import { isServiceAway } from "#app/lib/service-away.server.ts";
import { chosenType } from "#app/publish/api/accept.ts";
import type { Operation, Scope } from "#app/publish/api/operations.ts";
import { ApiProblem, problemBody, problemStatus, type Wrong } from "#app/publish/api/problem.ts";
import { readRequest } from "#app/publish/api/read-request.ts";
import { matches } from "#app/publish/cached-json.server.ts";
import { csvType } from "#app/publish/files/release-file.ts";
import { keptBody, type MadeBody } from "./kept-bodies.server.ts";

type Args = {
	request: Request;
	context: Readonly<RouterContextProvider>;
	params: Record<string, string | undefined>;
};

/** A request that was understood. */
export type Asked<O extends Operation> = {
	request: Request;
	params: z.infer<O["params"]>;
	query: z.infer<O["query"]>;
	/** The media type to answer with; empty where a file's own is. */
	type: string;
	words: Record<"en" | "es", TFunction>;
};

/**
 * What is answered: either a response that is ready, or what its tag is made of, with the body to be made only for who has
 * no copy of it.
 */
export type Answer = { response: Response } | { version: string; body(): Promise<MadeBody> };

const methods = "GET, HEAD, OPTIONS";
const open = {
	"access-control-allow-origin": "*",
	"access-control-expose-headers": "etag, link, ratelimit, ratelimit-policy, retry-after, content-range, repr-digest",
};
const preflight = {
	...open,
	allow: methods,
	"access-control-allow-methods": methods,
	"access-control-allow-headers": "authorization, if-none-match, range, if-range, accept",
	"access-control-max-age": "86400",
};

/** The one way in which the API answers: who asks, how often, what was asked, and then the work, the tag and the headers. */
export async function answer<O extends Operation>(
	operation: O,
	{ request, context, params }: Args,
	work: (asked: Asked<O>) => Promise<Answer>,
): Promise<Response> {
	if (request.method === "OPTIONS") return new Response(null, { status: 204, headers: preflight });
	const headers: Record<string, string> = { ...open, vary: "accept, accept-language, authorization" };
	try {
		if (request.method !== "GET" && request.method !== "HEAD")
			throw new ApiProblem("method_not_allowed", [], { allow: methods });
		// Whoever tries keys is counted by address, as one without any.
		const key = await keyOf(request, operation).catch(onlyProblem);
		const refusedKey = key instanceof Error;
		const counted = await countRequest(request, refusedKey ? null : key);
		Object.assign(headers, counted.headers);
		if (!counted.allowed) throw new ApiProblem("too_many_requests");
		if (refusedKey) throw key;
		const understood = readRequest(operation, params, new URL(request.url).searchParams);
		const type = typeOf(request, operation);
		const instance = getInstance(context);
		const words = { en: instance.getFixedT("en", "dataroom"), es: instance.getFixedT("es", "dataroom") };
		const made = await work({ request, ...understood, type, words });
		return "response" in made ? withHeaders(made.response, headers) : await tagged(made, request, type, headers);
	} catch (error) {
		const problem = isServiceAway(error) ? new ApiProblem("service_away", [], { "retry-after": "60" }) : error;
		return refused(onlyProblem(problem), request, headers, context);
	}
}

/** What is no problem of the one who asks goes on as it came. */
function onlyProblem(error: unknown): ApiProblem {
	if (error instanceof ApiProblem) return error;
	throw error;
}

async function keyOf(request: Request, operation: Operation): Promise<KnownKey | null> {
	const header = request.headers.get("authorization");
	if (header === null) return null;
	const challenge = { "www-authenticate": 'Bearer realm="api", error="invalid_token"' };
	const [, given] = /^Bearer +([\w-]{20,100})$/i.exec(header) ?? [];
	const key = given ? await checkApiKey(given) : "not_valid";
	if (key === "not_valid") throw new ApiProblem("key_not_valid", [], challenge);
	if (key === "expired") throw new ApiProblem("key_expired", [], challenge);
	if (key === "access_ended") throw new ApiProblem("access_ended");
	if (!key.scopes.includes(operation.scope)) throw outOfScope(operation.scope);
	return key;
}

/** Which right is missing, for the program (RFC 6750, section 3.1) and in words, with the page where rights are chosen. */
function outOfScope(scope: Scope): ApiProblem {
	const values = { page: `${env().BASE_URL}/dataroom/keys` };
	const wrong: Wrong = { parameter: "authorization", code: `without_${scope}`, values, allowed: [scope] };
	const challenge = `Bearer realm="api", error="insufficient_scope", scope="${scope}"`;
	return new ApiProblem("key_out_of_scope", [wrong], { "www-authenticate": challenge });
}

function typeOf(request: Request, { types }: Operation): string {
	if (types.length === 0) return "";
	const type = chosenType(request.headers.get("accept"), types);
	if (!type) throw new ApiProblem("not_acceptable", [{ parameter: "accept", code: "unknown_code", allowed: types }]);
	return type;
}

/** A minute's copy, then asked for anew by its tag: a release that is withdrawn must soon be nowhere. */
const caching = "public, max-age=60, stale-while-revalidate=300";

async function tagged(
	{ version, body }: Extract<Answer, { version: string }>,
	request: Request,
	type: string,
	headers: Record<string, string>,
): Promise<Response> {
	// Made of what the answer depends on, not of the answer, so that it costs nothing to say "you have it". A release never
	// changes; another version of the code may tell it otherwise.
	const url = new URL(request.url);
	const made = [codeVersion(), url.pathname, url.search, type, version].join("\n");
	const etag = `"${createHash("sha256").update(made).digest("base64url").slice(0, 27)}"`;
	const told: Record<string, string> = { ...headers, etag, "cache-control": caching };
	if (matches(request.headers.get("if-none-match"), etag)) return new Response(null, { status: 304, headers: told });

	const { bytes, next } = await keptBody(etag, body);
	if (next) told.link = `<${next}>; rel="next"`;
	told["content-type"] = type === "text/csv" ? csvType : `${type}; charset=utf-8`;
	return new Response(request.method === "HEAD" ? null : bytes, { headers: told });
}

const started = Date.now();
/** Code without a version may be other code after a restart. */
function codeVersion(): string {
	const version = env().CODE_VERSION;
	return version === "unversioned" ? `${version} ${started}` : version;
}

function withHeaders(response: Response, headers: Record<string, string>): Response {
	for (const [name, value] of Object.entries(headers)) response.headers.set(name, value);
	return response;
}

function refused(
	problem: ApiProblem,
	request: Request,
	headers: Record<string, string>,
	context: Readonly<RouterContextProvider>,
): Response {
	const { pathname } = new URL(request.url);
	const body = problemBody(problem, pathname, `${env().BASE_URL}/api`, getT(context, "dataroom"));
	return new Response(request.method === "HEAD" ? null : JSON.stringify(body), {
		status: problemStatus[problem.code],
		headers: {
			...headers,
			...problem.headers,
			"cache-control": "no-store",
			"content-language": getLanguage(context),
			"content-type": "application/problem+json; charset=utf-8",
		},
	});
}
