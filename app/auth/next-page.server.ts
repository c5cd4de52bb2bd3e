import { createCookie } from "react-router";
import { env } from "#app/lib/env.server.ts";
import { sameSitePath } from "#app/lib/same-site-path.ts";

let cookie: ReturnType<typeof createCookie> | undefined;

/** Remembers, in the browser and signed, where a sign-in was asked for. */
function nextCookie() {
	const secure = env().BASE_URL.startsWith("https:");
	cookie ??= createCookie(secure ? "__Host-tallygrove_next" : "tallygrove_next", {
		path: "/",
		httpOnly: true,
		sameSite: "lax",
		secure,
		maxAge: 600,
		secrets: [env().SESSION_SECRET],
	});
	return cookie;
}

export function rememberNext(next: string): Promise<string> {
	return nextCookie().serialize(next);
}

export async function readNext(request: Request): Promise<string> {
	return sameSitePath(await nextCookie().parse(request.headers.get("cookie")), "/me");
}

export function forgetNext(): Promise<string> {
	return nextCookie().serialize("", { maxAge: 0 });
}
