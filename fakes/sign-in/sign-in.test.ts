import { createHash, randomBytes } from "node:crypto";
import type { Server } from "node:http";
import type { AddressInfo } from "node:net";
import { afterAll, beforeAll, expect, test } from "vitest";
import { createSignIn } from "./app.ts";
import { people } from "./people.mjs";

const client = { id: "tallygrove", secret: "s3cret:with/signs", redirectUris: ["http://app.example/sign-in/callback"] };
const redirectUri = "http://app.example/sign-in/callback";
const clock = { now: Date.now() };
let server: Server;
let address: string;

beforeAll(async () => {
	const app = await createSignIn({ issuer: "http://127.0.0.1", client, now: () => clock.now });
	server = app.listen(0, "127.0.0.1");
	await new Promise((resolve) => server.once("listening", resolve));
	address = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
});
afterAll(() => void server.close());

const newVerifier = () => randomBytes(32).toString("base64url");

function authorize(verifier: string, changes: Record<string, string> = {}) {
	const query = new URLSearchParams({
		client_id: client.id,
		redirect_uri: redirectUri,
		response_type: "code",
		state: "state-of-this-test",
		code_challenge: createHash("sha256").update(verifier).digest("base64url"),
		code_challenge_method: "S256",
		persona: "demo-marit-osgood",
		...changes,
	});
	for (const [key, value] of Object.entries(changes)) if (value === "") query.delete(key);
	return fetch(`${address}/authorize?${query}`, { redirect: "manual" });
}

const sentBack = (response: Response) => new URL(response.headers.get("location") ?? "none:").searchParams;

async function getCode(verifier: string, changes: Record<string, string> = {}): Promise<string> {
	const response = await authorize(verifier, changes);
	expect(response.status).toBe(302);
	return sentBack(response).get("code") ?? "";
}

function trade(code: string, verifier: string, changes: Record<string, string> = {}, secret = client.secret) {
	const body = {
		grant_type: "authorization_code",
		code,
		redirect_uri: redirectUri,
		code_verifier: verifier,
		...changes,
	};
	const basic = Buffer.from(`${client.id}:${encodeURIComponent(secret)}`).toString("base64");
	return fetch(`${address}/token`, {
		method: "POST",
		headers: { Authorization: `Basic ${basic}` },
		body: new URLSearchParams(body),
	});
}

const errorOf = async (response: Response) => ({ status: response.status, ...((await response.json()) as object) });
const userinfo = (token: string) => fetch(`${address}/userinfo`, { headers: { Authorization: `Bearer ${token}` } });

test("a chosen person's code is traded for a token that tells who they are", async () => {
	const verifier = newVerifier();
	const response = await authorize(verifier, { persona: "demo-rogelio-santibanez" });
	expect(response.headers.get("location")).toMatch(/^http:\/\/app\.example\/sign-in\/callback\?/);
	expect(sentBack(response).get("state")).toBe("state-of-this-test");

	const traded = await trade(sentBack(response).get("code") ?? "", verifier);
	expect(traded.status).toBe(200);
	expect(traded.headers.get("cache-control")).toBe("no-store");
	const tokens = (await traded.json()) as Record<string, string>;
	expect(tokens).not.toHaveProperty("refresh_token");
	const idToken = JSON.parse(Buffer.from(tokens.id_token?.split(".")[1] ?? "", "base64url").toString()) as object;
	expect(idToken).toMatchObject({ sub: "demo-rogelio-santibanez" });

	const told = await userinfo(tokens.access_token ?? "");
	expect(await told.json()).toMatchObject({
		sub: "demo-rogelio-santibanez",
		name: "Rogelio Santibáñez",
		email: "rogelio@orchard.example",
	});
});

test("the secret may be sent in the body instead", async () => {
	const verifier = newVerifier();
	const body = new URLSearchParams({
		grant_type: "authorization_code",
		code: await getCode(verifier),
		redirect_uri: redirectUri,
		code_verifier: verifier,
		client_id: client.id,
		client_secret: client.secret,
	});
	expect((await fetch(`${address}/token`, { method: "POST", body })).status).toBe(200);
});

test.each([
	["an address that is not the application's", { redirect_uri: "http://app.example/elsewhere" }],
	["an address that only begins like it", { redirect_uri: `${redirectUri}.evil.example` }],
	["an unknown application", { client_id: "somebody-else" }],
])("%s gets a page and no redirect", async (_case, changes) => {
	const response = await authorize(newVerifier(), changes);
	expect(response.status).toBe(400);
	expect(response.headers.get("location")).toBeNull();
	expect(await response.text()).toContain("This sign-in cannot go on");
});

test.each([
	["state", { state: "" }, "invalid_request"],
	["challenge", { code_challenge: "" }, "invalid_request"],
	["S256", { code_challenge_method: "plain" }, "invalid_request"],
	["response type", { response_type: "token" }, "unsupported_response_type"],
])("a request without its %s goes back with an error and no code", async (_case, changes, error) => {
	const back = sentBack(await authorize(newVerifier(), changes));
	expect(back.get("error")).toBe(error);
	expect(back.get("code")).toBeNull();
});

test("a code works once", async () => {
	const verifier = newVerifier();
	const code = await getCode(verifier);
	expect((await trade(code, verifier)).status).toBe(200);
	expect(await errorOf(await trade(code, verifier))).toEqual({ status: 400, error: "invalid_grant" });
});

test("a code is refused after a minute", async () => {
	const verifier = newVerifier();
	const code = await getCode(verifier);
	clock.now += 60_001;
	expect(await errorOf(await trade(code, verifier))).toEqual({ status: 400, error: "invalid_grant" });
});

test("a wrong verifier is refused, and the code is gone with it", async () => {
	const verifier = newVerifier();
	const code = await getCode(verifier);
	expect(await errorOf(await trade(code, newVerifier()))).toEqual({ status: 400, error: "invalid_grant" });
	expect((await trade(code, verifier)).status).toBe(400);
});

test("a wrong secret is refused, and the code stays good for the right one", async () => {
	const verifier = newVerifier();
	const code = await getCode(verifier);
	expect(await errorOf(await trade(code, verifier, {}, "wrong"))).toEqual({ status: 401, error: "invalid_client" });
	expect((await trade(code, verifier)).status).toBe(200);
});

test("another redirect address at the trade is refused", async () => {
	const verifier = newVerifier();
	const traded = await trade(await getCode(verifier), verifier, { redirect_uri: "http://app.example/elsewhere" });
	expect(await errorOf(traded)).toEqual({ status: 400, error: "invalid_grant" });
});

test("grants other than the code are refused", async () => {
	for (const grant_type of ["password", "client_credentials", "refresh_token"]) {
		const traded = await trade("x", newVerifier(), { grant_type, username: "demo-marit-osgood" });
		expect(await errorOf(traded)).toEqual({ status: 400, error: "unsupported_grant_type" });
	}
});

test("userinfo without a token of ours is refused", async () => {
	for (const header of ["", "Bearer made-up"]) {
		expect((await fetch(`${address}/userinfo`, { headers: { Authorization: header } })).status).toBe(401);
	}
});

test("without a person the page offers all of them, in English and in Spanish", async () => {
	const english = await (await authorize(newVerifier(), { persona: "" })).text();
	const spanish = await (await authorize(newVerifier(), { persona: "", lang: "es" })).text();
	for (const { name } of people) expect(english).toContain(name);
	expect(english).toContain('<html lang="en">');
	expect(spanish).toContain('<html lang="es">');
	expect(spanish).toContain("¿Quién quiere ser?");
});

test("what was typed for somebody new comes back escaped, with what to mend", async () => {
	const response = await authorize(newVerifier(), {
		persona: "new",
		name: '"><script>alert(1)</script>',
		email: "not-one",
	});
	expect(response.status).toBe(400);
	const html = await response.text();
	expect(html).not.toContain("<script>");
	expect(html).toContain("&lt;script&gt;");
	expect(html).toContain("Enter an e-mail address");
});

test("somebody new is the same person at the next sign-in", async () => {
	const subjects = [];
	for (const email of ["ana@new.example", "ANA@new.example"]) {
		const verifier = newVerifier();
		const code = await getCode(verifier, { persona: "new", name: "Ana Newby", email });
		const { access_token = "" } = (await (await trade(code, verifier)).json()) as Record<string, string>;
		subjects.push(((await (await userinfo(access_token)).json()) as { sub: string }).sub);
	}
	expect(subjects[0]).toMatch(/^new-[0-9a-f]{16}$/);
	expect(subjects[1]).toBe(subjects[0]);
});

test("who cancels goes back with access_denied", async () => {
	expect(sentBack(await authorize(newVerifier(), { persona: "cancel" })).get("error")).toBe("access_denied");
});
