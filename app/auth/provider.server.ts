import { Authenticator } from "remix-auth";
import { OAuth2RequestError, OAuth2Strategy } from "remix-auth-oauth2";
import { z } from "zod";
import { env } from "#app/lib/env.server.ts";
import type { Identity } from "./accounts.server.ts";

/** Why a sign-in did not end with a person; the page's words are `common:signIn.problem.<reason>`. */
export const signInFailures = ["denied", "stale", "failed", "away"] as const;
export type SignInFailure = (typeof signInFailures)[number];

class SignInError extends Error {
	constructor(
		readonly reason: SignInFailure,
		cause?: unknown,
	) {
		super(`sign-in ${reason}`, { cause });
	}
}

const timeout = 8_000;
const strategyName = "institution";

/** What is used of an OpenID provider's description of itself. */
const Discovery = z.object({
	issuer: z.string(),
	authorization_endpoint: z.url(),
	token_endpoint: z.url(),
	userinfo_endpoint: z.url(),
});

const Userinfo = z.object({
	sub: z.string().min(1).max(255),
	name: z.string().trim().max(200).optional().catch(undefined),
	email: z.email().max(254).optional().catch(undefined),
	/** A yes in any other form is none. */
	email_verified: z.literal(true).optional().catch(undefined),
});

let ready: Promise<Authenticator<Identity>> | undefined;

/** Found out at the first sign-in, not at start: the site reads well while the provider is away. A failure is tried again. */
function authenticator(): Promise<Authenticator<Identity>> {
	ready ??= discover().catch((error: unknown) => {
		ready = undefined;
		throw error;
	});
	return ready;
}

async function discover(): Promise<Authenticator<Identity>> {
	const { OAUTH_ISSUER, OAUTH_CLIENT_ID, OAUTH_CLIENT_SECRET, BASE_URL } = env();
	const issuer = OAUTH_ISSUER.replace(/\/$/, "");
	const description = Discovery.parse(await fetchJson(`${issuer}/.well-known/openid-configuration`));
	// Another issuer's answer at this address would sign its own people in as ours.
	if (description.issuer.replace(/\/$/, "") !== issuer) throw new Error("the provider names another issuer");

	const strategy = new OAuth2Strategy<Identity>(
		{
			clientId: OAUTH_CLIENT_ID,
			clientSecret: OAUTH_CLIENT_SECRET,
			authorizationEndpoint: description.authorization_endpoint,
			tokenEndpoint: description.token_endpoint,
			redirectURI: `${BASE_URL}/sign-in/callback`,
			scopes: ["openid", "profile", "email"],
			cookie: {
				name: stateCookieName(),
				httpOnly: true,
				sameSite: "Lax",
				secure: isSecure() || undefined,
				path: "/",
				maxAge: 600,
			},
		},
		({ tokens }) => readIdentity(description.userinfo_endpoint, issuer, tokens.accessToken()),
	);
	return new Authenticator<Identity>().use(strategy, strategyName);
}

/** The access token is used once, here, and forgotten: nothing later acts in a person's name at the provider. */
async function readIdentity(endpoint: string, issuer: string, token: string): Promise<Identity> {
	const answer = await fetchJson(endpoint, { authorization: `Bearer ${token}` });
	const parsed = Userinfo.safeParse(answer);
	if (!parsed.success) throw new SignInError("failed", parsed.error);
	const { sub, name, email, email_verified: emailVerified = false } = parsed.data;
	return { issuer, subject: sub, displayName: name || email || sub.slice(0, 200), email: email ?? null, emailVerified };
}

async function fetchJson(url: string, headers: Record<string, string> = {}): Promise<unknown> {
	const signal = AbortSignal.timeout(timeout);
	const response = await fetch(url, { headers: { accept: "application/json", ...headers }, signal });
	if (!response.ok) throw new SignInError(response.status >= 500 ? "away" : "failed");
	return response.json();
}

/** Sends a browser to the provider, with state and PKCE challenge; their secrets go into a short-lived cookie. */
export async function startSignIn(request: Request): Promise<Response> {
	// The strategy reads the address: what is typed behind it must not look like a provider's answer.
	const clean = new Request(`${env().BASE_URL}/sign-in/start`, { headers: request.headers });
	try {
		await withTimeout(authenticator().then((known) => known.authenticate(strategyName, clean)));
	} catch (thrown) {
		if (thrown instanceof Response) return thrown;
		throw new SignInError("away", thrown);
	}
	throw new SignInError("failed");
}

/** @returns who came back from the provider. @throws SignInError, whatever went wrong; see `failureOf`. */
export async function finishSignIn(request: Request): Promise<Identity> {
	if (!new URL(request.url).searchParams.get("state")) throw new SignInError("stale");
	return withTimeout(authenticator().then((known) => known.authenticate(strategyName, request)));
}

/** What to tell the reader about a sign-in that failed. */
export function failureOf(error: unknown): SignInFailure {
	if (error instanceof SignInError) return error.reason;
	if (error instanceof OAuth2RequestError) return error.code === "access_denied" ? "denied" : "stale";
	// The strategy's words for a state that is missing, another browser's, or used already.
	if (error instanceof ReferenceError || error instanceof RangeError) return "stale";
	return "away";
}

/** The token exchange has no time limit of its own. */
function withTimeout<T>(work: Promise<T>): Promise<T> {
	let timer: NodeJS.Timeout;
	const late = new Promise<never>((_, reject) => {
		timer = setTimeout(() => reject(new SignInError("away")), timeout);
	});
	return Promise.race([work, late]).finally(() => clearTimeout(timer));
}

const isSecure = () => env().BASE_URL.startsWith("https:");
const stateCookieName = () => (isSecure() ? "__Host-tallygrove_state" : "tallygrove_state");

/** Headers that take away every state cookie a browser holds: they are of no use after one sign-in, or a failed one. */
export function clearedStateCookies(request: Request): string[] {
	const names = (request.headers.get("cookie") ?? "").split(/;\s*/).map((pair) => pair.split("=")[0] ?? "");
	const secure = isSecure() ? "; Secure" : "";
	return names
		.filter((name) => name.startsWith(`${stateCookieName()}:`))
		.map((name) => `${name}=; Max-Age=0; Path=/; HttpOnly; SameSite=Lax${secure}`);
}
