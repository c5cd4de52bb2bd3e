import type { Browser, Page } from "playwright-core";
import { Client } from "pg";
import { afterAll, beforeAll, expect, test } from "vitest";
import { axeFindings, openBrowser, openPage, phone, signIn, signInAsAssociate } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

let stack: Stack;
let browser: Browser;
let associate: Page;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack(), openBrowser()]);
	const owner = new Client({ connectionString: stack.database.ownerUrl });
	await owner.connect();
	for (const [name, email, crop] of [
		["Quail Bend Orchard", "ada@quailbend.example", "apple"],
		["Quail Bend Fruit Farm", "ada@quailbend.example", "plum"],
		["Otter Slough Fruit", null, "plum"],
	])
		await owner.query(
			`with o as (insert into directory.owner (name) values ('Ada Quill') returning owner_id),
			p as (insert into directory.operation (owner_id, name, county_fips, state_fips, contact_name, email)
				select owner_id, $1, '19103', '19', 'Ada Quill', $2 from o returning operation_id)
			insert into directory.planting (operation_id, crop_key, bearing_trees) select operation_id, $3, 40 from p`,
			[name, email, crop],
		);
	associate = await openPage(browser);
	await signInAsAssociate(associate, stack.baseUrl, owner, ["19"]);
	await owner.end();
});
afterAll(async () => {
	await browser?.close();
	await stack?.[Symbol.asyncDispose]();
});

/** Goes to a button or link by keyboard and presses it there. */
async function press(page: Page, role: "button" | "link", name: string | RegExp): Promise<void> {
	await page.getByRole(role, { name }).first().focus();
	await page.keyboard.press("Enter");
}

async function fits(page: Page): Promise<void> {
	expect(await page.evaluate(() => document.documentElement.scrollWidth - innerWidth), page.url()).toBeLessThanOrEqual(
		0,
	);
	expect(await axeFindings(page)).toEqual([]);
}

const readIn = async (page: Page, name: string, text: string) => {
	await page.goto(`${stack.baseUrl}/desk/growers/import`);
	await page.setInputFiles("[name=file]", { name, mimeType: "text/csv", buffer: Buffer.from(text) });
	await press(page, "button", "Read the file");
	await page.getByRole("heading", { name: "Which column holds what" }).waitFor();
};

test("an associate narrows the list, keeps that as a view, and acts on those in it", async () => {
	const page = associate;
	await page.goto(`${stack.baseUrl}/desk/growers`);
	await page.selectOption("[name=crop]", "plum");
	await press(page, "button", "Search");
	await expect.poll(() => page.locator("tbody tr").count()).toBe(2);
	await fits(page);
	await page.locator("summary", { hasText: "Keep this list" }).focus();
	await page.keyboard.press("Enter");
	await page.fill("[name=name]", "Plums");
	await page.keyboard.press("Enter");
	await page.getByText("The view is kept.").waitFor();
	await page.goto(`${stack.baseUrl}/desk/growers`);
	expect(await page.locator("tbody tr").count()).toBe(3);
	await press(page, "link", "Plums");
	await expect.poll(() => page.locator("tbody tr").count()).toBe(2);

	await page.selectOption("[name=which]", "matching");
	await press(page, "button", "Choose what to do");
	await page.getByRole("heading", { name: "2 growers chosen" }).waitFor();
	await fits(page);
	await press(page, "button", "Set to Spanish");
	await page.getByText("Set the language of 2 growers to Spanish?").waitFor();
	expect(await axeFindings(page)).toEqual([]);
	await press(page, "button", "Do it");
	await page.getByText("The language of 2 growers is set.").waitFor();
});

// How a file with errors is mended and read in is in season-alone.test.ts.
test("a file is read in by keyboard, and the import undone", async () => {
	const page = associate;
	await readIn(page, "list.csv", "Farm;County;E-mail;Crop;Trees\nAlder Creek;Johnson;al@alder.example;Apple;12\n");
	await fits(page);
	await press(page, "button", "Check the rows");
	await press(page, "button", "Take 1 grower into the list");
	await press(page, "button", "Take them in");
	await page.getByRole("button", { name: "Undo this import" }).waitFor();
	await fits(page);
	await page.goto(`${stack.baseUrl}/desk/growers?q=alder`);
	expect(await page.locator("tbody tr").count()).toBe(1);

	await page.goto(`${stack.baseUrl}/desk/growers/import`);
	await fits(page);
	await press(page, "link", "list.csv");
	await press(page, "button", "Undo this import");
	await press(page, "button", "Undo it");
	await page.locator("dd", { hasText: "Undone" }).waitFor();
	await page.goto(`${stack.baseUrl}/desk/growers?q=alder`);
	expect(await page.locator("tbody tr").count()).toBe(0);
});

test("two that are one are compared, merged, and made two again", async () => {
	const page = associate;
	await page.goto(`${stack.baseUrl}/desk/growers/duplicates`);
	await fits(page);
	await press(page, "link", /^Compare Quail Bend/);
	await page.getByRole("heading", { name: "This one stays" }).waitFor();
	await fits(page);
	await press(page, "button", "Merge the two");
	await page.locator("dialog[open]").waitFor();
	await page.locator("dialog[open]").getByRole("button", { name: "Merge the two" }).focus();
	await page.keyboard.press("Enter");
	await page.getByText("The two are one grower now.").waitFor();
	await page.locator("summary", { hasText: "Note a contact" }).focus();
	await page.keyboard.press("Enter");
	await page.fill("[name=note]", "Rang about the two names");
	await fits(page);
	await press(page, "button", "Note it");
	await page.getByText("Rang about the two names").waitFor();
	await page.goto(`${stack.baseUrl}/desk/growers?q=quail`);
	expect(await page.locator("tbody tr").count()).toBe(1);
	await page.goto(`${stack.baseUrl}/desk/growers/duplicates`);
	await press(page, "button", "Undo");
	await page.locator("dialog[open]").getByRole("button", { name: "Undo" }).focus();
	await page.keyboard.press("Enter");
	await page.getByText("They are two growers again.").waitFor();
	await page.goto(`${stack.baseUrl}/desk/growers?q=quail`);
	expect(await page.locator("tbody tr").count()).toBe(2);
});

test("what was typed stands, and is sent after all, when the session has ended meanwhile", async () => {
	const page = associate;
	await page.goto(`${stack.baseUrl}/desk/growers?q=otter`);
	await press(page, "link", "Otter Slough Fruit");
	await page.locator("summary", { hasText: "Note a contact" }).focus();
	await page.keyboard.press("Enter");
	await page.fill("[name=note]", "Rang while signed out");
	const owner = new Client({ connectionString: stack.database.ownerUrl });
	await owner.connect();
	await owner.query("delete from auth.session");
	const noted = async () => (await owner.query("select from collect.contact where note ~ 'signed out'")).rowCount;
	await press(page, "button", "Note it");
	const notice = page.getByRole("alert");
	await notice.getByText("You are signed out, and nothing was saved").waitFor();
	await expect.poll(() => notice.evaluate((box) => box === document.activeElement)).toBe(true);
	expect(await page.inputValue("[name=note]")).toBe("Rang while signed out");
	await fits(page);
	expect(await noted()).toBe(0);

	for (const [who, then] of [
		["Marit Osgood", "Somebody else is signed in now, and nothing was saved"],
		["Del Fenwick", "The contact is noted."],
	] as const) {
		const opened = page.context().waitForEvent("page");
		await press(page, "link", /opens a new tab/);
		const tab = await opened;
		if (new URL(tab.url()).pathname === "/sign-out") await tab.getByRole("button", { name: "Sign out" }).last().click();
		await signIn(tab, stack.baseUrl, who);
		await tab.close();
		await press(page, "button", "Send it again");
		await page.getByText(then).waitFor();
		expect(await noted()).toBe(who === "Del Fenwick" ? 1 : 0);
	}
	expect(await notice.count()).toBe(0);
	await owner.end();
});

test("the list and a file work in Spanish on a phone without scripts", async () => {
	const plain = await openPage(browser, {
		...phone,
		javaScriptEnabled: false,
		language: "es-US",
		storageState: await associate.context().storageState(),
	});
	await plain.goto(`${stack.baseUrl}/desk/growers`);
	await plain.getByRole("heading", { name: "Productores" }).waitFor();
	await plain.selectOption("[name=which]", "page");
	await plain.getByRole("button", { name: "Elegir qué hacer" }).click();
	await plain.getByRole("heading", { name: /productores elegidos/ }).waitFor();
	await plain.goto(`${stack.baseUrl}/desk/growers/import`);
	await plain.getByRole("button", { name: "Leer el archivo" }).click();
	await plain.getByRole("link", { name: "Elija un archivo" }).waitFor();
	await plain.setInputFiles("[name=file]", {
		name: "lista.csv",
		mimeType: "text/csv",
		buffer: Buffer.from("Finca,Condado\nCerro Alto,Johnson\n"),
	});
	await plain.getByRole("button", { name: "Leer el archivo" }).click();
	await expect
		.poll(async () => {
			await plain.reload();
			return plain.getByRole("button", { name: "Revisar las filas" }).count();
		})
		.toBe(1);
	await plain.getByRole("button", { name: "Revisar las filas" }).click();
	await expect
		.poll(async () => {
			await plain.reload();
			return plain.getByText("¿Pasar 1 productor a la lista?").count();
		})
		.toBe(1);
	await plain.context().close();
});

test("every page fits a phone in Spanish, and axe finds nothing", async () => {
	const page = await openPage(browser, {
		...phone,
		language: "es-US",
		storageState: await associate.context().storageState(),
	});
	for (const path of ["", "/chosen?which=matching", "/import", "/duplicates"]) {
		await page.goto(`${stack.baseUrl}/desk/growers${path}`);
		await fits(page);
	}
	await page.goto(`${stack.baseUrl}/desk/growers?q=otter`);
	await page.getByRole("link", { name: "Otter Slough Fruit" }).click();
	await page.getByRole("link", { name: "Cambiar", exact: true }).click();
	await page.getByRole("heading", { name: "Cambiar Otter Slough Fruit" }).waitFor();
	await fits(page);
	await page.fill("[name=name]", "");
	await page.getByRole("button", { name: "Guardar" }).click();
	await page.getByRole("alert").waitFor();
	await fits(page);
	await page.goto(`${stack.baseUrl}/desk/growers/duplicates`);
	await page.getByRole("link", { name: /^Comparar Quail Bend/ }).click();
	await page.getByRole("heading", { name: "Esta se queda" }).waitFor();
	await fits(page);
	await page.goto(`${stack.baseUrl}/desk/growers/import`);
	await page.getByRole("link", { name: "lista.csv" }).click();
	await page.getByRole("button", { name: "Pasar 1 productor a la lista" }).waitFor();
	await fits(page);
	expect(page.complaints.filter((complaint) => !complaint.includes("400 (Bad Request)"))).toEqual([]);
	await page.context().close();
});
