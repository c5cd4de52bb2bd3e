import type { Browser, Page } from "playwright-core";
import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { axeFindings, openBrowser, openPage, phone, signIn, signInAsAssociate } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let browser: Browser;
let associate: Page;
const operations = [
	{ name: "Quail Bend <b>Orchard</b>", county: "19103", email: "ada@quailbend.example" },
	{ name: "Otter Slough Fruit", county: "19103", email: null },
	{ name: "Stony Ford Farm", county: "55025", email: "stony@ford.example" },
];

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack({ coordinatorSubject: "demo-marit-osgood" }), openBrowser()]);
	const owner = new Client({ connectionString: stack.database.ownerUrl });
	await owner.connect();
	for (const { name, county, email } of operations)
		await owner.query(
			`with o as (insert into directory.owner (name) values ('Ada Quill') returning owner_id),
			p as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name, email)
				select owner_id, $1, $2, left($2, 2), 'Ada Quill', $3 from o returning operation_id)
			insert into directory.planting (operation_id, crop_key, bearing_trees) select operation_id, 'apple', 40 from p`,
			[name, county, email],
		);
	associate = await openPage(browser);
	await signInAsAssociate(associate, stack.baseUrl, owner, ["19", "55"]);
	await owner.end();
});
afterAll(async () => {
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

async function openSurvey(page: Page): Promise<string> {
	await page.goto(`${stack.baseUrl}/desk/surveys/new`);
	await page.fill("[name=closesOn]", new Date(Date.now() + 5 * 86_400_000).toISOString().slice(0, 10));
	await page.getByRole("button", { name: "Make the draft" }).click();
	await page.getByRole("button", { name: "Open the survey" }).click();
	await page.getByRole("button", { name: "Open it" }).click();
	await page.getByText("The survey is open.").waitFor();
	return new URL(page.url()).pathname;
}

test("the desk opens on what needs doing, and leads to the growers to ring and to a new link", async () => {
	const survey = await openSurvey(associate);
	await associate.goto(`${stack.baseUrl}/desk`);
	expect(await axeFindings(associate)).toEqual([]);
	await associate.getByRole("link", { name: /2 growers have no invitation yet/ }).waitFor();
	await associate.getByRole("link", { name: /1 grower has not answered and has no e-mail address/ }).click();
	await associate.waitForURL(/show=no_address/);
	await expect.poll(() => associate.locator("tbody tr").count()).toBe(1);
	expect(await axeFindings(associate)).toEqual([]);

	await associate.goto(`${stack.baseUrl}${survey}/responses?q=quail`);
	expect(await associate.getByRole("link", { name: /^County/ }).getAttribute("href")).toContain("q=quail");
	await associate.getByRole("link", { name: "Quail Bend <b>Orchard</b>" }).click();
	await associate.getByRole("button", { name: "Send a new link" }).click();
	expect(await axeFindings(associate)).toEqual([]);
	await associate.keyboard.press("Enter");
	await associate.getByText("A new link to Quail Bend <b>Orchard</b> is on its way.").waitFor();
});

test("a closing time gone by is told beside its field with all that was typed, also without scripts on a phone", async () => {
	const survey = await openSurvey(associate);
	const plain = await openPage(browser, {
		...phone,
		javaScriptEnabled: false,
		storageState: await associate.context().storageState(),
	});
	for (const page of [associate, plain]) {
		await page.goto(stack.baseUrl + survey);
		await page.fill("[name=closesOn]", "2020-01-02");
		await page.fill("[name=closesAt]", "09:30");
		await page.getByRole("button", { name: "Move the closing time" }).click();
		await page.getByRole("link", { name: "Closing day must be in the future" }).waitFor();
		expect(await page.inputValue("[name=closesOn]")).toBe("2020-01-02");
		expect(await page.inputValue("[name=closesAt]")).toBe("09:30");
	}
	expect(await axeFindings(associate)).toEqual([]);
	await associate.fill("[name=closesOn]", new Date(Date.now() + 30 * 86_400_000).toISOString().slice(0, 10));
	await associate.getByRole("button", { name: "Move the closing time" }).click();
	await associate.getByText("The closing time is moved.").waitFor();
});

test("the coordinator grants a grower's operation and reads in the log who did what", async () => {
	const coordinator = await openPage(browser);
	await signIn(coordinator, stack.baseUrl, "Marit Osgood");
	await coordinator.goto(`${stack.baseUrl}/network`);
	await coordinator.selectOption("[name=personId]", { label: "Del Fenwick, del@fourrivers.example" });
	await coordinator.selectOption("[name=role]", "grower");
	await coordinator.fill("[name=operation]", "nobody@ford.example");
	await coordinator.getByRole("button", { name: "Grant", exact: true }).click();
	await coordinator.getByRole("link", { name: /Operation must be in the list of growers/ }).waitFor();
	expect(await coordinator.inputValue("[name=role]")).toBe("grower");
	await coordinator.fill("[name=operation]", "stony@ford.example");
	await coordinator.getByRole("button", { name: "Grant", exact: true }).click();
	await coordinator.getByText("Grower, Stony Ford Farm", { exact: true }).waitFor();
	expect(await axeFindings(coordinator)).toEqual([]);

	await coordinator.goto(`${stack.baseUrl}/network/log?q=fenwick&show=survey`);
	await coordinator.getByRole("cell", { name: "Sent a new personal link" }).waitFor();
	expect(await coordinator.getByText("Quail Bend").count()).toBe(0);
	expect(await axeFindings(coordinator)).toEqual([]);
	expect((await coordinator.goto(`${stack.baseUrl}/desk/growers`))?.status()).toBe(403);

	// At twice the size a window of 1280 dots shows 640 of them: nothing there may be reached by scrolling sideways alone.
	for (const page of ["", "/invitations", "/settings", "/impact", "/log"]) {
		await coordinator.setViewportSize({ width: 640, height: 450 });
		await coordinator.goto(`${stack.baseUrl}/network${page}`);
		const beyond = await coordinator.evaluate(() => document.documentElement.scrollWidth - window.innerWidth);
		expect(beyond, page).toBeLessThanOrEqual(0);
		if (page !== "" && page !== "/log") expect(await axeFindings(coordinator)).toEqual([]);
	}
});
