import { createCookie } from "react-router";
import { env } from "#app/lib/env.server.ts";

let cookie: ReturnType<typeof createCookie> | undefined;

/** Keeps, in the browser and signed, the invitation that its reader goes to the sign-in with. */
function invitationCookie() {
	const secure = env().BASE_URL.startsWith("https:");
	cookie ??= createCookie(secure ? "__Host-tallygrove_invitation" : "tallygrove_invitation", {
		path: "/",
		httpOnly: true,
		sameSite: "lax",
		secure,
		maxAge: 900,
		secrets: [env().SESSION_SECRET],
	});
	return cookie;
}

export function keepInvitation(token: string): Promise<string> {
	return invitationCookie().serialize(token);
}

export async function readInvitation(request: Request): Promise<string | null> {
	const kept: unknown = await invitationCookie().parse(request.headers.get("cookie"));
	return typeof kept === "string" && kept !== "" ? kept : null;
}

export function forgetInvitation(): Promise<string> {
	return invitationCookie().serialize("", { maxAge: 0 });
}
