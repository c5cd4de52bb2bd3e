import type { Client } from "pg";
import type { Browser } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { askGrower } from "#tests/database/answering-fixture.ts";
import { addPerson, connectOwner, useDatabase } from "#tests/database/surveys-fixture.ts";
import { axeFindings, openBrowser, openPage, phone } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";

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

/** A grower's page at the first planting, come by the link. */
async function openPlanting(options: Parameters<typeof openPage>[1], language: "en" | "es" = "en") {
	const { place, step } = await askGrower(owner, associate, { language });
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) => createPersonalLink(trx, { ...place, expiresAt }));
	const page = await openPage(browser, { ...phone, ...options });
	await page.goto(`${stack.baseUrl}/r/${token}`);
	await page.getByRole("button", { name: /Open my survey|Abrir mi encuesta/ }).click();
	await page.waitForURL(/\/answer\//);
	await page.goto(`${stack.baseUrl}/answer/${place.surveyId}/${place.operationId}/ask/${step}`);
	return { page, ...place };
}

async function confirmedIn(surveyId: string): Promise<string[]> {
	const { rows } = await owner.query(
		`select c ->> 'check' as key from collect.answer join collect.response using (response_id),
			jsonb_array_elements(confirmed) c where survey_id = $1`,
		[surveyId],
	);
	return rows.map(({ key }) => key as string);
}

test.each([
	["with scripts", {}],
	["without scripts", { javaScriptEnabled: false }],
])("%s, an odd answer is asked about once, and one tap confirms it", async (how, options) => {
	const { page, surveyId } = await openPlanting(options);
	const crate = page.locator("[name=normal_crop_crate]");
	expect(await crate.isVisible()).toBe(false);
	await page.selectOption("[name=normal_crop_unit]", "crate");
	expect(await crate.isVisible()).toBe(true);
	expect(await page.locator("[name=harvested_crate]").isVisible()).toBe(false);
	await page.fill("[name=bearing_trees]", "40");
	await page.fill("[name=normal_crop]", "100");
	await page.fill("[name=harvested]", "300 crates");
	await page.getByRole("button", { name: "Continue" }).click();
	// Nobody told what a crate holds: both boxes are there, with what was typed.
	await page.getByRole("link", { name: "Enter the weight of one crate" }).first().waitFor();
	expect(await page.locator("[name=harvested]").inputValue()).toBe("300 crates");
	await page.fill("[name=normal_crop_crate]", "40");
	await page.getByRole("button", { name: "Continue" }).click();

	const asked = page.getByRole("alert").filter({ hasText: "Is that right?" });
	await asked.waitFor();
	expect(await asked.innerText()).toMatch(/What you picked: 300 crates of 40 lb each/);
	expect(await asked.innerText()).toMatch(/Normal crop: 100 crates of 40 lb each/);
	expect(await page.locator("[name=harvested]").inputValue()).toBe("300 crates");
	expect(await confirmedIn(surveyId)).toEqual([]);
	if (how === "with scripts") {
		await expect.poll(() => asked.evaluate((box) => box === document.activeElement)).toBe(true);
		expect(await axeFindings(page)).toEqual([]);
	}
	await page.getByRole("button", { name: "Yes, that is right" }).click();
	await page.waitForURL(/\/ask\/harvest_days/);
	expect(await confirmedIn(surveyId)).toEqual(["picked_far_above_normal"]);
	expect(page.complaints.filter((complaint) => !complaint.includes("400"))).toEqual([]);
});

test("the Enter key in a box goes on, and confirms nothing", async () => {
	const { page, surveyId } = await openPlanting({}, "es");
	await page.fill("[name=bearing_trees]", "40");
	await page.fill("[name=normal_crop]", "100,5 lb");
	await page.fill("[name=harvested]", "300");
	await page.keyboard.press("Enter");
	const asked = page.getByRole("alert").filter({ hasText: "¿Es correcto?" });
	await asked.waitFor();
	expect(await asked.innerText()).toContain("más del doble");
	const posted = page.waitForResponse(
		(answer) => answer.request().method() === "POST" && answer.url().includes("/ask/"),
	);
	await page.locator("[name=harvested]").press("Enter");
	expect((await posted).headers().location).toMatch(/\/ask\/planting-/);
	await asked.waitFor();
	expect(await confirmedIn(surveyId)).toEqual([]);
	await page.fill("[name=harvested]", "150");
	await page.getByRole("button", { name: "Continuar" }).click();
	await page.waitForURL(/\/ask\/harvest_days/);
	expect(await confirmedIn(surveyId)).toEqual([]);
});
