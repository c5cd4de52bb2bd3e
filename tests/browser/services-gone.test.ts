import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let admin: Client;

beforeAll(async () => {
	stack = await startStack();
	admin = new Client({ connectionString: process.env.TEST_DATABASE_ADMIN_URL });
	await admin.connect();
});
afterAll(async () => {
	await admin?.end();
	await stack?.[Symbol.asyncDispose]();
});

async function health(): Promise<[status: number, down: string[]]> {
	const { status, text } = await httpVisitor(stack.baseUrl).get("/healthz");
	const { ok: _, ...parts } = JSON.parse(text) as Record<string, { ok: boolean }>;
	return [
		status,
		Object.entries(parts)
			.filter(([, part]) => !part.ok)
			.map(([name]) => name),
	];
}

test("with the mail server gone the site goes on, and its health says which part is down", async () => {
	expect(await health()).toEqual([200, []]);
	await stack.kill("mail");
	expect(await health()).toEqual([503, ["mail"]]);
	expect((await httpVisitor(stack.baseUrl).get("/")).status).toBe(200);
	await stack.start("mail");
	expect(await health()).toEqual([200, []]);
});

test("with the sign-in service gone, signing in says so in the visitor's language and the map still opens", async () => {
	await stack.kill("signIn");
	const visitor = httpVisitor(stack.baseUrl, "es");
	const { location } = await visitor.get("/sign-in/start");
	const page = await visitor.get(location);
	expect(page.text).toContain("El servicio de inicio de sesión no responde");
	expect((await visitor.get("/map")).status).toBe(200);
	await stack.start("signIn");
	expect((await visitor.get("/sign-in/start")).location).toContain("/authorize?");
});

test("with the database gone every page answers 503 in words, and all is well once it is back", async () => {
	const name = new URL(stack.database.ownerUrl).pathname.slice(1);
	await admin.query(`alter database ${name} with allow_connections false`);
	await admin.query("select pg_terminate_backend(pid) from pg_stat_activity where datname = $1", [name]);
	const visitor = httpVisitor(stack.baseUrl);
	await expect.poll(async () => (await visitor.get("/")).status).toBe(503);
	for (const address of ["/map", "/reports", "/methods", `/r/${"x".repeat(43)}`]) {
		const { status, text } = await visitor.get(address);
		expect(`${status} ${address}`).toBe(`503 ${address}`);
		expect(text).toContain("A service that this page needs does not answer");
	}
	const refused = await fetch(`${stack.baseUrl}/api/v1/releases`);
	expect(refused.status).toBe(503);
	expect(refused.headers.get("content-type")).toBe("application/problem+json; charset=utf-8");
	expect(refused.headers.get("retry-after")).toBe("60");
	expect(await refused.json()).toMatchObject({ status: 503, title: "A service does not answer" });
	expect((await health())[0]).toBe(503);
	await admin.query(`alter database ${name} with allow_connections true`);
	await expect.poll(health, { timeout: 20_000 }).toEqual([200, []]);
	expect((await visitor.get("/map")).status).toBe(200);
});
