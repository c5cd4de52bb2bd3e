import type { Client } from "pg";
import type { Browser, Route } from "playwright-core";
import { afterAll, afterEach, beforeAll, expect, test } from "vitest";
import type { Associate } from "#app/auth/viewer.ts";
import { closeSurvey } from "#app/collect/survey-opening.server.ts";
import { closeLongAgo } from "#tests/database/answering-fixture.ts";
import { addPerson, asDesk, connectOwner, count, useDatabase } from "#tests/database/surveys-fixture.ts";
import { axeFindings, closePages, openBrowser } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import {
	askByLink,
	heldByPhone,
	heldByServer,
	openPhone,
	openWindow,
	readyForNoSignal,
	word,
} from "./offline/phone.ts";

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
afterEach(() => closePages(browser));
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
	await expect.poll(() => page.inputValue("[name=harvested]")).toBe("50 and a bit");
	expect(page.complaints).toEqual([]);
});

test("Back, the browser's and the page's own, loses nothing that was typed", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await page.goto(grower.address);
	await page.goto(grower.ask);
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
	await expect.poll(() => page.inputValue("[name=harvested]")).toBe("62");
});

test("what was typed last is not lost where the browser ends the page before the phone's store has written it", async () => {
	const grower = await asked();
	// The phone's worker would send what the pages here cannot.
	const page = await openPhone(browser, grower, { serviceWorkers: "block" });
	await page.route("**/keep/**", (route) => route.abort());
	await page.fill("[name=harvested]", "63");
	await word(page).getByText("Kept on this phone", { exact: false }).waitFor();
	// A store that is kept busy has not written anything by the time the page ends, and what a page sends as it ends, which no
	// route of a test stops, is sent to nobody.
	await page.evaluate(async () => {
		window.fetch = () => Promise.reject(new TypeError("no signal"));
		const opening = indexedDB.open("tallygrove-answers");
		await new Promise((resolve) => opening.addEventListener("success", resolve));
		const held = opening.result.transaction("held", "readwrite").objectStore("held");
		const stay = () => held.count().addEventListener("success", stay);
		stay();
	});
	await page.fill("[name=harvested]", "64");
	await page.goto(grower.address);
	expect(await heldByServer(owner, grower.place.surveyId)).toEqual({});
	await page.unroute("**/keep/**");
	await page.goto(grower.ask);
	await expect.poll(() => page.inputValue("[name=harvested]")).toBe("64");
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 64 });
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

test("a page that was drawn before the server had an answer shows it all the same, and goes on from it", async () => {
	const grower = await asked();
	// Without the service worker, what the test answers in the server's place is what the page gets.
	const page = await openPhone(browser, grower, { serviceWorkers: "block" });
	const drawnBefore = await (await page.request.get(grower.ask)).body();
	await page.fill("[name=harvested]", "55");
	await word(page).getByText("are kept", { exact: false }).waitFor();
	await page.route(grower.ask, (route) =>
		route.fulfill({ body: drawnBefore, contentType: "text/html; charset=utf-8" }),
	);
	await page.goto(grower.ask);
	await expect.poll(() => page.inputValue("[name=harvested]")).toBe("55");
	await page.fill("[name=harvested]", "56");
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 56 });
});

test("what is typed before the page's script is there is not covered by what the phone held", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower, { serviceWorkers: "block" });
	await page.route("**/keep/**", (route) => route.abort());
	await page.fill("[name=harvested]", "57");
	await word(page).getByText("Kept on this phone", { exact: false }).waitFor();
	const scripts: Route[] = [];
	await page.route("**/*.js", (route) => void scripts.push(route));
	await page.goto(grower.ask, { waitUntil: "commit" });
	await page.fill("[name=harvested]", "58");
	await page.unroute("**/keep/**");
	expect(scripts.length).toBeGreaterThan(0);
	await Promise.all(scripts.map((script) => script.continue()));
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 58 });
	expect(await page.inputValue("[name=harvested]")).toBe("58");
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
	await expect.poll(() => one.inputValue("[name=harvested]")).toBe("81");
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
	await word(page).getByText("This phone has no room left to keep your answers", { exact: false }).waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 110 });
	await page.context().setOffline(true);
	await page.fill("[name=harvested]", "111");
	await word(page).getByText("Leave this page open.", { exact: false }).waitFor();
	await page.context().setOffline(false);
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 111 });
});

test("a survey that closes while somebody types says so, and takes it as late", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await asDesk(associate, (trx) => closeSurvey(trx, associate, grower.place.surveyId));
	await page.fill("[name=harvested]", "120");
	await word(page).getByText("The survey has closed meanwhile, so it counts as late.", { exact: false }).waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 120 });
	await closeLongAgo(owner, grower.place.surveyId);
	await page.fill("[name=harvested]", "121");
	await word(page).getByText("The survey has closed. What you type now is not kept.").waitFor();
	expect(await heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 120 });
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
	await expect.poll(() => other.inputValue("[name=harvested]")).toBe("");
	expect(await heldByServer(owner, first.place.surveyId)).toEqual({});
	await other.goto(await first.link());
	await other.locator("form button").last().click();
	await other.goto(first.ask);
	await expect.poll(() => other.inputValue("[name=harvested]")).toBe("130");
	await expect.poll(() => heldByServer(owner, first.place.surveyId)).toMatchObject({ harvested: 130 });
	expect(await heldByServer(owner, second.place.surveyId)).toEqual({});
});

test("an opened survey is answered to its end without signal, and sent in once when signal is back", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await readyForNoSignal(page);
	// More from each tree than is likely, which the phone asks about, too.
	await page.fill("[name=normal_crop]", "50000");
	await page.context().setOffline(true);
	await page.fill("[name=harvested]", "a lot");
	await word(page).getByText("Kept on this phone", { exact: false }).waitFor();
	const next = () => page.getByRole("button", { name: "Continue" }).click();
	await next();
	await page.getByText("There is no signal. You can go on", { exact: false }).waitFor();
	await page.locator("#field-harvested[aria-invalid=true]").waitFor();
	expect(await axeFindings(page)).toEqual([]);
	await page.fill("[name=harvested]", "1000");
	await next();
	await page.getByRole("button", { name: "Yes, that is right" }).click();
	await page.fill("[name=cause_freeze]", "100");
	await next();
	await page.locator("[name=first_harvest]").waitFor();
	await page.getByRole("link", { name: "Back" }).click();
	await expect.poll(() => page.inputValue("[name=cause_freeze]")).toBe("100");
	await next();
	await next();
	await page.check("[name=bud_set][value=light]");
	await next();
	await page.getByRole("heading", { name: "Check your answers" }).waitFor();
	expect(await page.innerText("main")).toMatch(/1,000 lb.*100%.*Light/s);
	await page.getByRole("button", { name: "Send my answers" }).click();
	await page.getByRole("heading", { name: "Your answers wait on this phone" }).waitFor();
	expect(await axeFindings(page)).toEqual([]);
	await page.close();

	await page.context().setOffline(false);
	const again = await openWindow(page.context(), grower.address);
	await again.getByRole("heading", { name: "Thank you, we have your answers" }).waitFor();
	expect(await again.innerText("main")).toMatch(/1,000 lb.*100%.*Light/s);
	const submissions = "collect.submission join collect.response using (response_id) where survey_id = $1";
	expect(await count(owner, submissions, [grower.place.surveyId])).toBe(1);
	// The phone keeps no copy of what was sent in.
	await expect.poll(() => heldByPhone(again)).toEqual([0, 0]);
	expect(page.complaints.filter((line) => !line.includes("ERR_INTERNET_DISCONNECTED"))).toEqual([]);
});

test("going on while the server is away is answered by the phone, and by the server again when it is back", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await readyForNoSignal(page);
	await stack.kill("server");
	await page.fill("[name=normal_crop]", "4000");
	await page.fill("[name=harvested]", "4000");
	await page.getByRole("button", { name: "Continue" }).click();
	await page.locator("[name=first_harvest]").waitFor();
	await page.reload();
	await page.locator("[name=first_harvest]").waitFor();
	await page.fill("[name=first_harvest]", "2031-09-02");
	await stack.start("server");
	// The phone is told of its signal; that it tries by itself, too, is waited for where a server was killed.
	await page.evaluate(() => window.dispatchEvent(new Event("online")));
	await page.getByText("There is no signal. You can go on", { exact: false }).waitFor({ state: "hidden" });
	await expect
		.poll(() => heldByServer(owner, grower.place.surveyId), { timeout: 60_000 })
		.toMatchObject({ harvested: 4000 });
	await page.goto(`${grower.address}/review`);
	await page.getByText("4,000 lb").first().waitFor();
	expect(await page.locator("text=There is no signal").count()).toBe(0);
});

test("what the phone has taken along is not drawn in another grower's session", async () => {
	const first = await asked();
	const second = await asked();
	const page = await openPhone(browser, first);
	await readyForNoSignal(page);
	expect((await heldByPhone(page))[1]).toBe(1);
	await page.goto(await second.link());
	await page.locator("form button").last().click();
	await page.waitForURL(second.address);
	await expect.poll(() => heldByPhone(page)).toEqual([0, 0]);
	await page.context().setOffline(true);
	await page.goto(first.ask);
	await page.getByText("this phone does not hold this page", { exact: false }).waitFor();
	expect(await page.locator("form").count()).toBe(0);
});

test("a survey that closed long before a phone had signal again says what was not received", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await page.context().setOffline(true);
	await page.fill("[name=harvested]", "140");
	await word(page).getByText("Kept on this phone", { exact: false }).waitFor();
	await closeLongAgo(owner, grower.place.surveyId);
	await page.close();
	await page.context().setOffline(false);
	const again = await openWindow(page.context(), grower.address);
	await again
		.getByText("The survey closed before all that you typed on this phone could be sent.", { exact: false })
		.waitFor();
	await expect.poll(() => heldByPhone(again)).toEqual([0, 0]);
	expect(await heldByServer(owner, grower.place.surveyId)).toEqual({});
});

test("a phone whose clock is wrong loses nothing and blames nobody", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await readyForNoSignal(page);
	await page.clock.setFixedTime(new Date("2019-03-01T12:00:00Z"));
	await page.context().setOffline(true);
	await page.fill("[name=harvested]", "150");
	await page.fill("[name=normal_crop]", "150");
	await page.getByRole("button", { name: "Continue" }).click();
	await page.locator("[name=first_harvest]").waitFor();
	await page.context().setOffline(false);
	const again = await openWindow(page.context(), grower.ask);
	await expect.poll(() => heldByServer(owner, grower.place.surveyId)).toMatchObject({ harvested: 150 });
	expect(await again.getByText("changed", { exact: false }).count()).toBe(0);
});

test("tapping Send twice makes one response, and the keyboard alone is enough for it all", async () => {
	const grower = await asked();
	const page = await openPhone(browser, grower);
	await page.focus("[name=normal_crop]");
	await page.keyboard.type("4000");
	await page.focus("[name=harvested]");
	await page.keyboard.type("4000");
	await page.keyboard.press("Enter");
	await page.locator("[name=first_harvest]").waitFor();
	await page.focus("[name=first_harvest]");
	await page.keyboard.press("Enter");
	await page.locator("[name=bud_set]").first().waitFor();
	await page.focus("[name=bud_set]");
	await page.keyboard.press("Space");
	await page.focus("button[data-on]");
	await page.keyboard.press("Enter");
	const send = page.getByRole("button", { name: "Send my answers" });
	await send.waitFor();
	await send.dblclick();
	await page.getByRole("heading", { name: "Thank you, we have your answers" }).waitFor();
	const submissions = "collect.submission join collect.response using (response_id) where survey_id = $1";
	expect(await count(owner, submissions, [grower.place.surveyId])).toBe(1);
	expect(await count(owner, "collect.mailing where survey_id = $1 and kind = 'receipt'", [grower.place.surveyId])).toBe(
		1,
	);
});
