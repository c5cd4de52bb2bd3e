import type { Browser, BrowserContext, Page } from "playwright-core";
import type { Client } from "pg";
import { expect } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { askGrower } from "#tests/database/answering-fixture.ts";
import { openPage, phone } from "#tests/helpers/browser.ts";

/** A grower who is asked by a survey of its own and has begun, with the addresses of its pages. */
export async function askByLink(owner: Client, associate: Associate, baseUrl: string) {
	const { place, step, grower } = await askGrower(owner, associate);
	const expiresAt = new Date(Date.now() + 86_400_000);
	const link = async () => {
		const token = await scopedTransaction({ kind: "network" }, (trx) =>
			createPersonalLink(trx, { ...place, expiresAt }),
		);
		return `${baseUrl}/r/${token}`;
	};
	const address = `${baseUrl}/answer/${place.surveyId}/${place.operationId}`;
	return { place, grower, step, link, address, ask: `${address}/ask/${step}` };
}
export type Asked = Awaited<ReturnType<typeof askByLink>>;

/** A phone of the grower's own on which the link has been opened. */
export async function openPhone(browser: Browser, asked: Asked, options: Parameters<typeof openPage>[1] = {}) {
	const page = await openPage(browser, { ...phone, ...options });
	await followLink(page, await asked.link());
	await page.goto(asked.ask);
	return page;
}

/** Takes up a personal link as its page's button does, without drawing two pages that other tests walk through. */
export async function followLink(page: Page, link: string): Promise<void> {
	const headers = { origin: new URL(link).origin };
	const answer = await page.request.post(link, { headers, form: {}, maxRedirects: 0 });
	expect(answer.status()).toBe(303);
}

/** Another window of the same phone, with the same cookies and store. */
export async function openWindow(context: BrowserContext, address: string): Promise<Page> {
	const page = await context.newPage();
	page.setDefaultTimeout(30_000);
	await page.goto(address);
	return page;
}

/** How many responses and how many surveys the phone holds. */
export function heldByPhone(page: Page): Promise<[number, number]> {
	return page.evaluate(async () => {
		// oxlint-disable-next-line unicorn/consistent-function-scoping -- runs in the browser, which has nothing of this file
		const answer = <T>(request: IDBRequest<T>) =>
			new Promise<T>((resolve) => request.addEventListener("success", () => resolve(request.result)));
		const database = await answer(indexedDB.open("tallygrove-answers"));
		const count = (store: string) => answer(database.transaction(store).objectStore(store).count());
		const counts: [number, number] = [await count("held"), await count("packs")];
		database.close();
		return counts;
	});
}

/** Waits until the phone could draw the survey by itself. */
export async function readyForNoSignal(page: Page): Promise<void> {
	await page.waitForFunction(async () => {
		await navigator.serviceWorker.ready;
		return (await caches.match("/answer/offline")) !== undefined && navigator.serviceWorker.controller !== null;
	});
	await expect.poll(() => heldByPhone(page)).toEqual([expect.anything(), 1]);
}

export const word = (page: Page) => page.locator("#kept-word");

/** What the server holds of a survey, by question. */
export async function heldByServer(owner: Client, surveyId: string): Promise<Record<string, unknown>> {
	const { rows } = await owner.query(
		`select question_key, kind, value from collect.answer join collect.response using (response_id)
		where survey_id = $1`,
		[surveyId],
	);
	return Object.fromEntries(rows.map(({ question_key: key, kind, value }) => [key, value ?? kind]));
}
