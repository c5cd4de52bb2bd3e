import type { Client } from "pg";
import type { Browser, Page } from "playwright-core";
import { afterAll, beforeAll, expect, test } from "vitest";
import { scopedTransaction } from "#app/auth/scope.server.ts";
import type { Associate } from "#app/auth/viewer.ts";
import { type ReadyFormKey, readyFormKeys } from "#app/collect/forms/ready-forms.ts";
import { createPersonalLink } from "#app/collect/personal-link.server.ts";
import { openSurvey } from "#app/collect/survey-opening.server.ts";
import { createSurvey } from "#app/collect/surveys.server.ts";
import { addPlanting } from "#tests/database/answering-fixture.ts";
import {
	addOperation,
	addPerson,
	asDesk,
	connectOwner,
	draftOf,
	useDatabase,
} from "#tests/database/surveys-fixture.ts";
import { axeFindings, openBrowser, openPage, phone } from "#tests/helpers/browser.ts";
import { type Stack, startStack } from "#tests/helpers/stack.ts";
import { said } from "./chain/answering.ts";

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

/** By the name of a screen's question: what is typed in its box, or the options that are ticked. */
type Typed = Record<string, string | string[]>;
const season = new Date().getFullYear();
const pest = (key: string): Typed => ({
	[`${key}_trees`]: "20",
	[`${key}_severity`]: ["light"],
	[`${key}_fruit`]: ["no"],
});
const typed: Record<ReadyFormKey, Typed> = {
	bloom_watch: {
		bloom_density: ["light"],
		first_bloom: `${season}-05-02`,
		full_bloom: `${season}-05-06`,
		petal_fall: `${season}-05-14`,
		bee_weather: ["mixed"],
	},
	after_freeze: {
		coldest_day: `${season}-05-04`,
		coldest: "27.5",
		hours_below: "4",
		stage: ["full_bloom"],
		buds_cut: "50",
		buds_dead: "35",
		protection: ["water", "fans"],
	},
	pests: { seen: ["japanese_beetle"], ...pest("japanese_beetle") },
	after_harvest: {
		normal_crop: "4000",
		harvested: "1000",
		cause_freeze: "100",
		first_harvest: `${season}-09-02`,
		bud_set: ["normal"],
	},
};
/** Numbers as they are written in Spanish here, and a unit that is typed with its number. */
const typedInSpanish: Typed = { coldest: "27,5", normal_crop: "4000 libras" };

async function invite(formKey: ReadyFormKey, language: "en" | "es") {
	const operationId = await addOperation(owner, { state: "19", language, email: null, trees: 40 });
	await addPlanting(owner, operationId, { crop: "plum", trees: 20 });
	const draft = draftOf(["19"], { formKey, season, crops: ["apple", "plum"], titleEn: undefined, titleEs: undefined });
	const surveyId = await asDesk(associate, async (trx) => {
		const made = (await createSurvey(trx, associate, draft)) as { surveyId: string };
		expect(await openSurvey(trx, associate, made.surveyId)).toBe("opened");
		return made.surveyId;
	});
	const place = { surveyId, operationId };
	const expiresAt = new Date(Date.now() + 86_400_000);
	const token = await scopedTransaction({ kind: "network" }, (trx) => createPersonalLink(trx, { ...place, expiresAt }));
	return { ...place, link: `${stack.baseUrl}/r/${token}` };
}

/** Fills in the screen that is open, and tells what it holds of what there is to type. */
async function fillIn(page: Page, language: "en" | "es", values: Typed): Promise<string[]> {
	const there: string[] = [];
	for (const [name, value] of Object.entries(values)) {
		const box = page.locator(`[name=${name}]`);
		if ((await box.count()) === 0) continue;
		there.push(name);
		if (typeof value === "string") await box.fill((language === "es" && (typedInSpanish[name] as string)) || value);
		else for (const option of value) await page.locator(`[name=${name}][value=${option}]`).check();
	}
	return there;
}

const inEach = readyFormKeys.flatMap((form) => [[form, "en"] as const, [form, "es"] as const]);
test.each(inEach)("the form %s is finished on a phone, in %s", async (form, language) => {
	const { link, surveyId } = await invite(form, language);
	const words = said[language];
	const page = await openPage(browser, { ...phone, language: `${language}-US` });
	await page.goto(link);
	await page.getByRole("button", { name: words.open }).click();
	await page.getByRole("button", { name: words.begin }).click();
	// The markup is the same in both languages and for each planting; it is looked through once.
	const lookedThrough = new Set<string>();
	const accessible = async () => {
		const screen = new URL(page.url()).pathname.replace(/-[\da-f-]{36}$/, "");
		if (language === "en" || lookedThrough.has(screen)) return;
		lookedThrough.add(screen);
		expect(await axeFindings(page)).toEqual([]);
	};
	const filled = new Set<string>();
	const pages: string[] = [];
	for (;;) {
		await page.waitForURL((url) => /\/(ask\/[^/]+|review)$/.test(url.pathname) && !pages.includes(url.pathname));
		pages.push(new URL(page.url()).pathname);
		if (page.url().endsWith("/review")) break;
		await accessible();
		for (const name of await fillIn(page, language, typed[form])) filled.add(name);
		// Nothing on the screen is wider than the phone, and what is pressed is large enough for a thumb.
		expect(await page.evaluate(() => document.documentElement.scrollWidth)).toBeLessThanOrEqual(375);
		const button = page.getByRole("button", { name: words.next, exact: true });
		expect((await button.boundingBox())!.height).toBeGreaterThanOrEqual(44);
		await button.click();
	}
	expect([...filled].toSorted()).toEqual(Object.keys(typed[form]).toSorted());
	await accessible();
	await page.getByRole("button", { name: words.send }).click();
	await page.getByRole("heading", { name: words.thanks }).waitFor();
	await accessible();
	expect(page.complaints).toEqual([]);
	const { rows } = await owner.query(
		`select a.question_key as key, a.value from collect.answer a join collect.response r using (response_id)
			where r.survey_id = $1 and r.submitted_version = 1 and a.kind = 'given'`,
		[surveyId],
	);
	for (const [key, value] of Object.entries(typed[form])) {
		const isNumber = typeof value === "string" && !/^\d{4}-/.test(value);
		const expected = isNumber ? Number(value) : typeof value === "string" || value.length > 1 ? value : value[0];
		const found = rows.filter((row) => row.key === key).map((row) => row.value as unknown);
		expect(found.length, key).toBeGreaterThan(0);
		for (const one of found) expect([one].flat()).toEqual([expected].flat());
	}
	await page.context().close();
});
