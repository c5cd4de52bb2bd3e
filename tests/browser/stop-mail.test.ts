import type { Browser } from "playwright-core";
import type { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { sendInvitations } from "#app/collect/invitations.server.ts";
import { addSurvey } from "#tests/database/answering-fixture.ts";
import {
	addOperation,
	addPerson,
	asDesk,
	connectOwner,
	loadPlaces,
	useDatabase,
} from "#tests/database/surveys-fixture.ts";
import { axeFindings, openBrowser, openPage, phone } from "#tests/helpers/browser.ts";
import { httpVisitor } from "#tests/helpers/http-visitor.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let owner: Client;
let associate: Associate;
let browser: Browser;

beforeAll(async () => {
	stack = await startStack();
	useDatabase(stack.database);
	owner = await connectOwner(stack.database.ownerUrl);
	await loadPlaces(owner);
	associate = await addPerson(owner, "Del Fenwick", ["19"]);
	browser = await openBrowser();
});
afterAll(async () => {
	await browser?.close();
	await owner?.end();
	await stack?.[Symbol.asyncDispose]();
});

type Message = { headers: Record<string, string>; text: string };

/** A grower with an invitation in the inbox, and the address by which its mail is stopped. */
async function invited(email: string, language: "en" | "es" = "en") {
	await owner.query("update directory.operation set status = 'left'");
	const operationId = await addOperation(owner, { state: "19", email, language });
	const surveyId = await addSurvey(associate);
	await asDesk(associate, (trx) => sendInvitations(trx, associate, surveyId));
	const message = await expect
		.poll(() => findMail(email), { timeout: 30_000 })
		.toBeDefined()
		.then(() => findMail(email));
	const address = /^<(\S+)>$/.exec(message!.headers["list-unsubscribe"] ?? "")?.[1] ?? "";
	expect(message!.text).toContain(address);
	return { operationId, address };
}
async function findMail(email: string): Promise<Message | undefined> {
	const response = await fetch(`${stack.inboxUrl}/messages.json?to=${encodeURIComponent(email)}`);
	return ((await response.json()) as Message[])[0];
}
async function isWanted(operationId: string): Promise<boolean> {
	const { rows } = await owner.query("select mail_wanted from directory.operation where operation_id = $1", [
		operationId,
	]);
	return rows[0].mail_wanted as boolean;
}

test("a mail program's one post stops the mail: no cookie, no redirect, no page to press on", async () => {
	const { operationId, address } = await invited("one@quailbend.example", "es");
	const opened = await fetch(address);
	expect([opened.status, await isWanted(operationId)]).toEqual([200, true]);
	const posted = await fetch(address, {
		method: "POST",
		redirect: "error",
		headers: { "content-type": "application/x-www-form-urlencoded", "accept-language": "en" },
		body: "List-Unsubscribe=One-Click",
	});
	expect([posted.status, posted.headers.get("set-cookie"), await isWanted(operationId)]).toEqual([200, null, false]);
	// In the language of the mail, whatever program asks.
	expect(await posted.text()).toContain('<html lang="es"');
	const again = await fetch(address, { method: "POST", redirect: "error" });
	expect([again.status, await isWanted(operationId)]).toEqual([200, false]);
});

test("tokens that are cut, turned or made up are answered alike and change nothing", async () => {
	const { operationId, address } = await invited("two@quailbend.example");
	const turned = address.slice(0, -1) + (address.endsWith("A") ? "B" : "A");
	const visitor = httpVisitor(stack.baseUrl);
	const words = async (url: string, method: "get" | "post") => {
		const { status, text } = await visitor[method](url, {});
		return `${status} ${text.replaceAll(/\/stop-mail\/[\w-]+|nonce="[^"]*"/g, "").replaceAll(/<script[\s\S]*?<\/script>/g, "")}`;
	};
	for (const method of ["get", "post"] as const) {
		const answers = await Promise.all(
			[turned, address.slice(0, -1), `${stack.baseUrl}/stop-mail/${"x".repeat(64)}`].map((url) => words(url, method)),
		);
		expect(answers[0]).toMatch(/^404 /);
		expect(new Set(answers).size).toBe(1);
	}
	expect(await isWanted(operationId)).toBe(true);
});

test("mail is stopped, and comes again, by keyboard and without scripts", async () => {
	const { operationId, address } = await invited("three@quailbend.example");
	const page = await openPage(browser, { ...phone, javaScriptEnabled: false });
	await page.goto(address);
	expect(await isWanted(operationId)).toBe(true);
	const press = async (name: string) => {
		const button = page.getByRole("button", { name });
		for (let tabs = 0; tabs < 20 && !(await button.evaluate((one) => one === document.activeElement)); tabs++)
			await page.keyboard.press("Tab");
		await page.keyboard.press("Enter");
	};
	await press("Stop these e-mails");
	await page.getByRole("heading", { level: 1, name: /is stopped/ }).waitFor();
	expect(await isWanted(operationId)).toBe(false);
	// The name in part: whoever was sent the mail on learns no more.
	expect(await page.textContent("main")).not.toContain("Quail Bend");
	await press("Let them come again");
	await page.getByRole("heading", { level: 1, name: /comes again/ }).waitFor();
	expect(await isWanted(operationId)).toBe(true);
	expect(page.complaints).toEqual([]);
	await page.context().close();
});

test("axe finds nothing on the page that stops mail", async () => {
	const { address } = await invited("four@quailbend.example");
	const page = await openPage(browser, phone);
	await page.goto(address);
	expect(await axeFindings(page)).toEqual([]);
	await page.getByRole("button").filter({ hasText: "Stop" }).click();
	expect(await axeFindings(page)).toEqual([]);
	await page.context().close();
});
