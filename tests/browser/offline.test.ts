import type { Client } from "pg";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { addPerson, asDesk, connectOwner, useDatabase } from "#tests/database/surveys-fixture.ts";
import { axeFindings, openBrowser } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { askByLink, heldByServer, openPhone, openWindow, word } from "./offline/phone.ts";

let stack: Stack;
let browser: Browser;
let owner: Client;
let associate: Associate;

beforeAll(async () => {
	[stack, browser] = await Promise.all([startStack(), openBrowser()]);
	useDatabase(stack.database);
	owner = await connectOwner(stack.database.ownerUrl);
	associate = await addPerson(owner, "Del Fenwick", ["19"]);
});
afterAll(async () => {
	await browser?.close();
	await owner?.end();
	await stack?.[Symbol.asyncDispose]();
});

const asked = () => askByLink(owner, associate, stack.baseUrl);

test("an answer is kept at the server as it is given, and the page says so", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	expect(await word(page).textContent()).toBe("");
	await page.fill("[name=harvested]", "50");
	await word(page).getByText("Your answers on this screen are kept.").waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toEqual({ bearing_trees: 40, harvested: 50 });
	expect(await axeFindings(page)).toEqual([]);
	await page.fill("[name=harvested]", "50 and a bit");
	await word(page).getByText("Kept, except what is not finished yet: What you picked.").waitFor();
	// No error is shown while somebody types, and what was kept stays.
	expect(await page.locator("[aria-invalid]").count()).toBe(0);
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 50 });
	await page.reload();
	expect(await page.inputValue("[name=harvested]")).toBe("50 and a bit");
	expect(page.complaints).toEqual([]);
});

test("Back, the browser's and the page's own, loses nothing that was typed", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await page.fill("[name=harvested]", "61");
	await page.getByRole("link", { name: "Back" }).click();
	await page.waitForURL(grower.address);
	await page.goBack();
	await page.waitForURL(grower.ask);
	await expect.poll(() => page.inputValue("[name=harvested]")).toBe("61");
	await page.fill("[name=harvested]", "62");
	await page.goBack();
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 62 });
	await page.goto(grower.ask);
	expect(await page.inputValue("[name=harvested]")).toBe("62");
});

test("without signal it is kept on the phone, also when the window is closed, and sent when signal is back", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	const context = page.context();
	await context.setOffline(true);
	await page.fill("[name=harvested]", "70");
	await word(page).getByText("Kept on this phone: there is no signal.", { exact: false }).waitFor();
	await page.close();
	await context.setOffline(false);
	expect(await heldByServer(owner, grower.place.surveyId)).toEqual({});
	const again = await openWindow(context, grower.ask);
	await expect.poll(() => again.inputValue("[name=harvested]")).toBe("70");
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 70 });
	await context.setOffline(true);
	await again.fill("[name=harvested]", "71");
	await word(again).getByText("Kept on this phone", { exact: false }).waitFor();
	await context.setOffline(false);
	await word(again).getByText("Your answers on this screen are kept.").waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 71 });
});

test("two phones change one screen: each is told, both answers are shown, and one is chosen", async () => {
	const grower = await asked();
	const one = await openPhone(browser, grower);
	const other = await openPhone(browser, grower);
	await one.fill("[name=harvested]", "80");
	await word(one).getByText("are kept", { exact: false }).waitFor();
	await other.fill("[name=harvested]", "81");
	await word(other).getByText("Another device has changed this screen meanwhile.", { exact: false }).waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 80 });
	await other.getByRole("button", { name: "See both" }).click();
	const both = other.getByRole("alert");
	await both.getByText("Here:").waitFor();
	expect(await both.innerText()).toMatch(/Here: 81 .*On the other device: 80 /s);
	expect(await axeFindings(other)).toEqual([]);
	await both.getByRole("button", { name: "Keep what I typed here" }).click();
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 81 });

	await one.fill("[name=harvested]", "82");
	await one.getByRole("button", { name: "See both" }).click();
	await one.getByRole("link", { name: "Take the other answers" }).click();
	await expect.poll(() => one.inputValue("[name=harvested]")).toBe("81");
	await one.reload();
	expect(await one.inputValue("[name=harvested]")).toBe("81");
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 81 });
});

test("two windows of one phone do not write over each other, with signal or without", async () => {
	const grower = await asked();
	const one = await openPhone(browser, grower);
	const other = await openWindow(one.context(), grower.ask);
	await one.context().setOffline(true);
	await one.fill("[name=harvested]", "90");
	await word(one).getByText("Kept on this phone", { exact: false }).waitFor();
	await other.fill("[name=harvested]", "91");
	await word(other).getByText("open twice on this phone", { exact: false }).waitFor();
	await one.context().setOffline(false);
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 90 });
	await other.getByRole("button", { name: "See both" }).click();
	await other.getByRole("alert").getByRole("button", { name: "Keep what I typed here" }).click();
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 91 });
});

test("a server that was killed in between has all that it said it keeps, and gets the rest", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await page.fill("[name=harvested]", "100");
	await word(page).getByText("are kept", { exact: false }).waitFor();
	await stack.kill("server");
	await page.fill("[name=harvested]", "101");
	await word(page).getByText("Kept on this phone", { exact: false }).waitFor();
	await stack.start("server");
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 100 });
	await expect
		.poll(() => heldByServer(owner, grower.place.surveyId), { timeout: 40_000 })
		.toMatchObject({
			harvested: 101,
		});
});

test("a phone without room says what that means, and a full one does not lose what the server has", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await page.addInitScript(() => {
		IDBObjectStore.prototype.put = () => {
			throw new DOMException("full", "QuotaExceededError");
		};
	});
	await page.reload();
	await page.fill("[name=harvested]", "110");
	await word(page).getByText("This phone gives no room to keep them", { exact: false }).waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 110 });
	await page.context().setOffline(true);
	await page.fill("[name=harvested]", "111");
	await word(page).getByText("Leave this page open.", { exact: false }).waitFor();
	await page.context().setOffline(false);
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 111 });
});

test("a survey that closes while somebody types says so", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, grower.place.surveyId));
	await page.fill("[name=harvested]", "120");
	await word(page).getByText("The survey has closed. What you type now is not kept.").waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toEqual({});
});

test("another grower's link on the same phone shows nothing of the first one, whose answers wait for his own", async () => {
	const first = await asked();
	const second = await asked();
	const page = await openPhone(browser, first);
	await page.context().setOffline(true);
	await page.fill("[name=harvested]", "130");
	await word(page).getByText("Kept on this phone", { exact: false }).waitFor();
	await page.context().setOffline(false);
	await stack.kill("server");
	await page.close();
	await stack.start("server");
	const other = await openWindow(page.context(), await second.link());
	await other.locator("form button").last().click();
	await other.goto(second.ask);
	expect(await other.inputValue("[name=harvested]")).toBe("");
	expect(await heldByServer(owner, first.place.surveyId)).toEqual({});
	await other.goto(await first.link());
	await other.locator("form button").last().click();
	await other.goto(first.ask);
	await expect.poll(() => other.inputValue("[name=harvested]")).toBe("130");
	await expect.poll(() => heldByServer(owner, first.place.surveyId)).toMatchObject({ harvested: 130 });
	expect(await heldByServer(owner, second.place.surveyId)).toEqual({});
});
