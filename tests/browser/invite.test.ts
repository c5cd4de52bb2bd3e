import type { Browser } from "playwright-core";
import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { axeFindings, openBrowser, openPage, signIn } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let browser: Browser;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack({ coordinatorSubject: "demo-marit-osgood" }), openBrowser()]);
	const owner = new Client({ connectionString: stack.database.ownerUrl });
	await owner.connect();
	await owner.query(`with o as (insert into directory.owner (name) values ('Ada Quill') returning owner_id),
		p as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name, email, language)
			select owner_id, 'Quail Bend <b>Orchard</b>', '19103', '19', 'Ada Quill', 'ada@quailbend.example', 'es' from o returning operation_id)
		insert into directory.planting (operation_id, crop_key, bearing_trees) select operation_id, 'apple', 40 from p`);
	await owner.end();
});
afterAll(async () => {
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

type Mail = { to: string[]; text: string };
const mailsTo = async (address: string): Promise<Mail[]> =>
	(await (await fetch(`${stack.inboxUrl}/messages.json?to=${address}`)).json()) as Mail[];

test("a coordinator grants a state, and its associate's invitation reaches the grower in the grower's language", async () => {
	const associate = await openPage(browser);
	await signIn(associate, stack.baseUrl, "Del Fenwick");
	expect((await associate.goto(`${stack.baseUrl}/desk`))?.status()).toBe(403);

	const coordinator = await openPage(browser);
	await signIn(coordinator, stack.baseUrl, "Marit Osgood");
	await coordinator.goto(`${stack.baseUrl}/network`);
	expect(await axeFindings(coordinator)).toEqual([]);
	await coordinator.selectOption("[name=personId]", { label: "Del Fenwick, del@fourrivers.example" });
	await coordinator.selectOption("[name=role]", "associate");
	await coordinator.selectOption("[name=stateFips]", "19");
	await coordinator.getByRole("button", { name: "Grant", exact: true }).click();
	await coordinator.getByText("Associate, Iowa", { exact: true }).waitFor();

	await associate.goto(`${stack.baseUrl}/desk/surveys/new`);
	await associate.getByRole("button", { name: "Make the draft" }).click();
	await associate.getByRole("link", { name: "Enter closing day" }).waitFor();
	expect(await axeFindings(associate)).toEqual([]);
	await associate.fill("[name=closesOn]", new Date(Date.now() + 20 * 86_400_000).toISOString().slice(0, 10));
	await associate.getByRole("button", { name: "Make the draft" }).click();
	await associate.getByRole("button", { name: "Open the survey" }).click();
	await associate.getByRole("button", { name: "Open it" }).click();
	await associate.getByRole("button", { name: "Send invitations" }).click();
	await associate.getByRole("dialog").getByRole("button", { name: "Send", exact: true }).click();
	await associate.getByText("1 mail is on its way.").waitFor();
	expect(await axeFindings(associate)).toEqual([]);

	await expect.poll(() => mailsTo("ada@quailbend.example"), { timeout: 20_000 }).toHaveLength(1);
	const [mail] = await mailsTo("ada@quailbend.example");
	expect(mail?.text).toContain("Hola, Ada Quill");
	expect(mail?.text).toMatch(new RegExp(`${stack.baseUrl}/r/[\\w-]{43}`));

	const surveyPath = new URL(associate.url()).pathname;
	await coordinator.selectOption("[name=personId]", { label: "Marit Osgood, marit@fourrivers.example" });
	await coordinator.selectOption("[name=stateFips]", "55");
	await coordinator.getByRole("button", { name: "Grant", exact: true }).click();
	await coordinator.getByText("Associate, Wisconsin", { exact: true }).waitFor();
	expect((await coordinator.goto(stack.baseUrl + surveyPath))?.status()).toBe(404);
});
