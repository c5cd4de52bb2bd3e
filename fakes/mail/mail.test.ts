import type { Server } from "node:http";
import type { AddressInfo } from "node:net";
import { createTransport } from "nodemailer";
import type { SMTPServer } from "smtp-server";
import { afterAll, beforeAll, beforeEach, expect, test } from "vitest";
import { createInbox } from "./inbox.ts";
import { createSmtp } from "./smtp.ts";
import { MailStore, type Message } from "./store.ts";
import { TroubleMaker } from "./trouble.ts";

let smtp: SMTPServer;
let web: Server;
let inbox: string;
let send: (mail: Record<string, unknown>) => Promise<unknown>;

beforeAll(async () => {
	const store = new MailStore();
	const trouble = new TroubleMaker();
	smtp = createSmtp(store, trouble);
	await new Promise<void>((resolve) => void smtp.listen(0, "127.0.0.1", resolve));
	web = createInbox(store, trouble).listen(0, "127.0.0.1");
	await new Promise((resolve) => web.once("listening", resolve));
	inbox = `http://127.0.0.1:${(web.address() as AddressInfo).port}`;
	const { port } = smtp.server.address() as AddressInfo;
	const transport = createTransport(`smtp://127.0.0.1:${port}`);
	send = (mail) => transport.sendMail({ from: "survey@fourrivers.example", to: "wilma@orchard.example", ...mail });
});
beforeEach(async () => {
	await fetch(`${inbox}/messages`, { method: "DELETE" });
	await makeTrouble({ mode: "ok" });
});
afterAll(async () => {
	web.close();
	await new Promise<void>((resolve) => void smtp.close(resolve));
});

const makeTrouble = (trouble: unknown) =>
	fetch(`${inbox}/trouble`, {
		method: "POST",
		headers: { "Content-Type": "application/json" },
		body: JSON.stringify(trouble),
	});
const list = async (query = "") => (await (await fetch(`${inbox}/messages.json${query}`)).json()) as Message[];
const show = async (path: string) => (await fetch(`${inbox}${path}`)).text();

test("a sent mail is listed with its text, HTML and headers, and shown alone", async () => {
	await send({
		subject: "Cosecha de otoño",
		text: "Abra https://app.example/r/abc.",
		html: "<p>Abra</p>",
		headers: { "X-Survey": "7" },
	});
	const [message] = await list();
	expect(message).toMatchObject({
		from: "survey@fourrivers.example",
		to: ["wilma@orchard.example"],
		subject: "Cosecha de otoño",
		html: "<p>Abra</p>",
	});
	expect(message?.text.trim()).toBe("Abra https://app.example/r/abc.");
	expect(message?.headers["x-survey"]).toBe("7");
	expect(Date.parse(message?.receivedAt ?? "")).toBeGreaterThan(Date.now() - 60_000);

	expect(await (await fetch(`${inbox}/messages/${message?.id}.json`)).json()).toEqual(message);
	expect(await show("/")).toContain("Cosecha de otoño");
	expect(await show(`/messages/${message?.id}`)).toContain('<a href="https://app.example/r/abc" rel="noreferrer">');
});

test("the newest is first, and a search by address finds only its own", async () => {
	await send({ subject: "first", to: "a@orchard.example" });
	await send({ subject: "second", to: "b@orchard.example" });
	expect((await list()).map(({ subject }) => subject)).toEqual(["second", "first"]);
	expect((await list("?to=A@orchard")).map(({ subject }) => subject)).toEqual(["first"]);
	const found = await show("/?to=b@orchard.example");
	expect(found).toContain("second");
	expect(found).not.toContain("first");
});

test("more than a page of mail can be turned through", async () => {
	await send({ subject: "the oldest" });
	await Promise.all(Array.from({ length: 50 }, () => send({ subject: "a later one" })));
	expect(await show("/")).not.toContain("the oldest");
	expect(await show("/?page=2")).toContain("the oldest");
	expect(await show("/?page=99")).toContain("the oldest");
});

test("HTML in a mail does no harm", async () => {
	await send({
		subject: "<script>alert(1)</script>",
		text: "<img src=x onerror=alert(2)>",
		html: "<script>alert(3)</script>",
	});
	const [message] = await list();
	for (const html of [await show("/"), await show(`/messages/${message?.id}`)]) {
		expect(html).not.toContain("<script>");
		expect(html).not.toContain("<img");
	}
	const raw = await fetch(`${inbox}/messages/${message?.id}/html`);
	expect(raw.headers.get("content-security-policy")).toMatch(/^sandbox allow-popups .*default-src 'none'/);
});

test.each([
	["defer", 451],
	["bounce", 550],
	["refuse", 421],
])("trouble %s answers %i as often as asked, then all is well", async (mode, responseCode) => {
	await makeTrouble({ mode, count: 2 });
	await expect(send({ subject: "one" })).rejects.toMatchObject({ responseCode });
	await expect(send({ subject: "two" })).rejects.toMatchObject({ responseCode });
	await send({ subject: "three" });
	expect((await list()).map(({ subject }) => subject)).toEqual(["three"]);
});

test("trouble that is none is refused with words", async () => {
	const response = await makeTrouble({ mode: "explode" });
	expect(response.status).toBe(400);
	expect(await (await fetch(`${inbox}/trouble`)).json()).toEqual({ mode: "ok" });
});

test("a message that is not there answers 404", async () => {
	for (const path of ["/messages/none", "/messages/none.json", "/messages/none/html"]) {
		expect((await fetch(`${inbox}${path}`)).status).toBe(404);
	}
});
